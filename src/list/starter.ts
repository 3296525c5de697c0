/** The commented parts list that `start` writes: a working one-tube set, its common choices in the comments. */
export function starterList(): string {
  return `# Parts list of a one-tube set. Every line may be left out: what stands here is then assumed.
# Values are written as on the part: 2M2, 470k, 4k7, 100p, 0.1 µF (or 0.1 uF), 45 V, 920 kHz, 80 %.
# A tolerance may follow a part's value, for presolder spread: 100p +-20 %, 220k -10/+30 %.
# m and M differ: 60 mV, 2 MΩ (or 2 Mohm). A B supply can shock or kill; switch off and discharge before you solder.
name: My one-tube set

station:
  carrier: 920 kHz
  level: 60 mV              # carrier, rms, at the tap with no detector connected: 5 mV is weak, 1 V a strong local
  modulation: 80 %          # at the clip's largest peak
  pre-emphasis: none        # none, or nrsc-1 for a station that lifts its treble

tuned circuit:
  coil: 200 µH              # the detector loads it; for a source the detector cannot load, write 'loaded Q: 40' alone
  unloaded Q: 90
  tap: 1                    # part of the coil the detector sits on

detector:
  kind: grid leak
  law: tube                 # tube, or the textbook's square or linear law
  tube: 6SL7-GT             # presolder stock lists the types
  grid capacitor: 150 pF
  leak: 2M2
  leak position: to cathode # or: across capacitor
  leak returns to: cathode  # filament tubes: filament - or filament +

plate:
  supply: 90 V
  load: resistor 220 kΩ
  bypass: 220 pF            # plate to cathode; 0 for none

output:
  coupling: 10 nF
  into: next grid           # next grid, ceramic earpiece, crystal earpiece

# What is on the air besides, and Morse; samples/crowded-evening.yaml and samples/morse.yaml have more of it.
# on the air:
#   second station: { clip: other.wav, offset: 9 kHz, level: -10 dB }
#   noise: 50 µV

# What changes, by name. Each variant becomes one WAV file and one curve.
variants:
  as drawn: {}
  brighter: { plate.bypass: 100p }
  mellower: { plate.bypass: 2n2 }
# A part that has failed, to compare its voltages and its sound:
#  worn: { fault: weak tube 60 % }    # or: leaky coupling 2 MΩ, leaky bypass 500 kΩ, leak drifted +80 %, open bypass
`;
}
