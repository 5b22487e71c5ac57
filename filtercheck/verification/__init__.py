"""How a requirement is verified is what its key `verify` says.

    verify: worst-case

(where the key is left out) is for every board. The requirement passes when it
is proved that no combination of values within the tolerances breaks it, at any
frequency of its band. It fails when a board that breaks it was found; the
report names its values, and the command that computes its response. Else it is
undecided. Parts without a tolerance are exact. Tolerances are written

    R1: {resistance: 10k, tolerance: 1 %}
    C1: {capacitance: 100 uF, tolerance: [-20 %, +80 %]}
    U1: {amplifier: {gain_bandwidth: {min: 8 MHz, typical: 11 MHz, max: 14 MHz},
                     open_loop_gain: {typical: 120 dB, tolerance: 50 %}}}

and all values are independent of one another, but for the parts of a matched
network, of which each lies within `track` of a factor common to all of them:

    R2: {resistance: 10k, tolerance: 5 %, network: RN1, track: 0.1 %}
    R3: {resistance: 20k, tolerance: 5 %, network: RN1, track: 0.1 %}

Before any response is judged, every board is shown to be stable, or a board
that oscillates is shown.

    verify: nominal

is for the values as fitted and no others.

    verify: {yield: 99.7 %, confidence: 95 %, boards: 100000}

is for a share of random boards. It passes when the lower end of the interval
of that share (Clopper and Pearson) reaches what is required, fails when the
upper end misses it, and is undecided in between: more boards narrow the
interval. `boards` may be left out. The key `distribution` of a part says how
its values lie within the tolerance: `uniform` (where it is left out), `normal`
(the tolerance is three standard deviations, and nothing lies beyond) or
`two-sided` (the same, with the inner half sorted out for tighter grades). The
same requirement always draws the same boards.
"""
