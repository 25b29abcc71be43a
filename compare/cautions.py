"""The cautions that go with every result, in the one place the terminal, the report and the README take them from."""

CAUTIONS = (
    "Linear-elastic, small-displacement model of a perfect, stress-free member; the load enters as the job says.",
    "Not covered: fatigue, fracture, buckling, plasticity, wear, dynamic factors and proof-load factors.",
    "Lifting gear, presses and pressure parts are governed by local codes and by licensed practice: "
    "this supports a check, it does not replace one.",
)
