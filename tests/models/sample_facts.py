"""What an engineer finds by hand for beams of the sample models, with the calculation written out.

Loads are those of the rule set ``us-lrfd``: office floor 50 psf and partitions 15 psf, not reduced (ASCE 7-22
Table 4.3-1 and 4.3.2), roof live 20 psf (Table 4.3-1), superimposed dead 5 psf (common practice, no source), no snow.
Strength: 1.4 D and 1.2 D + 1.6 L or 1.2 D + 1.6 Lr (ASCE 7-22 2.3.1); the second governs wherever 1.6 L > 0.2 D, as for
every beam here. Flexure AISC 360-22 F2.1 (M_n = F_y Z_x, the slab holds the top flange), F3.2(a) where the flange is
non-compact; shear G2.1; live deflection of floors L/360 and of roofs L/240 (IBC Table 1604.3). Z_x, S_x, I_x, d, t_w,
h/t_w and b_f/2t_f are those of the AISC Shapes Database, 16th edition. The slab spans across the joists, which are the
closest pair of supports of every panel; spans are between centres of columns, girders and walls.
"""

from __future__ import annotations

from dataclasses import dataclass

OFFICE = "harbour-yard-office.ifc"
WORKSHOP = "millrace-workshop.ifc"


@dataclass(frozen=True, slots=True, kw_only=True)
class Fact:
    """What the row of one beam must say; numbers in the units of the beam table in ``si`` or ``us``.

    Attributes:
        name: Of the beam in the model.
        section: Drawn.
        grade: As the rule set calls it.
        span: [m or ft].
        tributary_width: [m or ft]; ``None`` where no single number is written down in practice.
        tributary_area: [m² or ft²].
        dead_load: Unfactored total, self-weight and reactions of carried beams included [kN or kip].
        live_load: The same for live or roof live load.
        moment: M_u [kN·m or kip-ft].
        moment_capacity: phi M_n.
        shear: V_u [kN or kip].
        shear_capacity: phi V_n.
        live_deflection: [mm or in]; ``None`` where not worked out by hand.
        live_deflection_limit: [mm or in].
        governing: Name of the governing check.
        status: ``adequate`` or ``inadequate``.
    """

    name: str
    section: str
    grade: str = "A992"
    span: float
    tributary_width: float | None
    tributary_area: float
    dead_load: float
    live_load: float
    moment: float
    moment_capacity: float
    shear: float
    shear_capacity: float
    live_deflection: float | None
    live_deflection_limit: float
    governing: str
    status: str

    @property
    def utilizations(self) -> dict[str, float]:
        """Ratio of every check that was worked out."""
        ratios = {"flexure": self.moment / self.moment_capacity, "shear": self.shear / self.shear_capacity}
        if self.live_deflection is not None:
            ratios["live deflection"] = self.live_deflection / self.live_deflection_limit
        return ratios

    @property
    def utilization(self) -> float:
        """The largest of them."""
        return max(self.utilizations.values())


# Units of the customary tables, in kN, m and mm.
PSF = 0.04788026  # kN/m²
PLF = 0.01459390  # kN/m
KIP = 4.4482216  # kN
KIP_FT = 1.3558179  # kN·m
IN4 = 25.4**4  # mm⁴
E_MPA = 29000 * 6.894757  # 29 000 ksi = 199 948 MPa

# ------------------------------------------------------------------------------------------ Harbour Yard office, SI
# Floor: carpet 0.010 m × 600 + screed 0.040 × 2000 + concrete 0.120 × 2350 = 6 + 80 + 282 = 368 kg/m²
#        368 × 9.80665 = 3.6088 kPa; superimposed 5 psf = 0.2394 kPa; dead 3.8482 kPa
FLOOR_D = 368.0 * 9.80665 / 1000 + 5 * PSF
FLOOR_L = (50 + 15) * PSF  # 3.1122 kPa
# Roof: membrane 0.005 × 1200 + insulation 0.150 × 40 + deck 0.045 × 240 = 6 + 6 + 10.8 = 22.8 kg/m²
#       22.8 × 9.80665 = 0.2236 kPa; superimposed 0.2394 kPa; dead 0.4630 kPa
ROOF_D = 22.8 * 9.80665 / 1000 + 5 * PSF
ROOF_L = 20 * PSF  # 0.9576 kPa


def factored(dead: float, live: float) -> float:
    """1.2 D + 1.6 L (or Lr)."""
    return 1.2 * dead + 1.6 * live


# --- Floor joist, line y = 2.5 m between girders B and C, W16X26: neighbours at 0 and 5.0 m -> width (2.5 + 2.5)/2
_D = FLOOR_D * 2.5 + 26 * PLF  # 9.6205 + 0.3794 = 10.000 kN/m
_L = FLOOR_L * 2.5  # 7.7805 kN/m
_W = factored(_D, _L)  # 12.000 + 12.449 = 24.449 kN/m
JOIST_BC = Fact(
    name="L1 joist BC 2.5",
    section="W16X26",
    span=8.4,
    tributary_width=2.5,
    tributary_area=2.5 * 8.4,  # 21.0
    dead_load=_D * 8.4,  # 84.00
    live_load=_L * 8.4,  # 65.36
    moment=_W * 8.4**2 / 8,  # 215.6
    moment_capacity=0.90 * 50 * 44.2 / 12 * KIP_FT,  # 165.75 kip-ft = 224.7
    shear=_W * 8.4 / 2,  # 102.7
    # h/t_w = 56.8 > 2.24 √(29 000/50) = 53.9, so phi = 0.90; C_v1 = 1 because 56.8 < 1.10 √(5.34 × 580) = 61.2
    shear_capacity=0.90 * 0.6 * 50 * 15.7 * 0.250 * KIP,  # 105.98 kip = 471.4
    live_deflection=5 * _L * 8400**4 / (384 * E_MPA * 301 * IN4),  # 20.1
    live_deflection_limit=8400 / 360,  # 23.3
    governing="flexure",  # 215.6 / 224.7 = 0.96
    status="adequate",
)

# --- Floor joist of a lower grade, line y = 5.0 m between girder C and wall D, W14X22 in A36
_D = FLOOR_D * 2.5 + 22 * PLF  # 9.6205 + 0.3211 = 9.942 kN/m
_W = factored(_D, _L)  # 11.930 + 12.449 = 24.379 kN/m
JOIST_A36 = Fact(
    name="L1 joist CD 5.0",
    section="W14X22",
    grade="A36",
    span=7.2,
    tributary_width=2.5,
    tributary_area=2.5 * 7.2,  # 18.0
    dead_load=_D * 7.2,  # 71.58
    live_load=_L * 7.2,  # 56.02
    moment=_W * 7.2**2 / 8,  # 158.0
    moment_capacity=0.90 * 36 * 33.2 / 12 * KIP_FT,  # 89.64 kip-ft = 121.5
    shear=_W * 7.2 / 2,  # 87.8
    # h/t_w = 53.3 < 2.24 √(29 000/36) = 63.6, so phi = 1.00
    shear_capacity=1.00 * 0.6 * 36 * 13.7 * 0.230 * KIP,  # 68.06 kip = 302.8
    live_deflection=5 * _L * 7200**4 / (384 * E_MPA * 199 * IN4),  # 16.4
    live_deflection_limit=7200 / 360,  # 20.0
    governing="flexure",  # 158.0 / 121.5 = 1.30
    status="inadequate",
)

# --- Shallow floor joist, line y = 9.5 m between girders B and C, W10X33: neighbours at 7.5 and 11.5 m -> width 2.0
_D = FLOOR_D * 2.0 + 33 * PLF  # 7.6964 + 0.4816 = 8.178 kN/m
_L = FLOOR_L * 2.0  # 6.2244 kN/m
_W = factored(_D, _L)  # 9.814 + 9.959 = 19.773 kN/m
JOIST_SHALLOW = Fact(
    name="L1 joist BC 9.5",
    section="W10X33",
    span=8.4,
    tributary_width=2.0,
    tributary_area=2.0 * 8.4,  # 16.8
    dead_load=_D * 8.4,  # 68.70
    live_load=_L * 8.4,  # 52.29
    moment=_W * 8.4**2 / 8,  # 174.4
    # b_f/2t_f = 9.15 < 0.38 √580 = 9.152: compact, just
    moment_capacity=0.90 * 50 * 38.8 / 12 * KIP_FT,  # 145.5 kip-ft = 197.3
    shear=_W * 8.4 / 2,  # 83.0
    shear_capacity=1.00 * 0.6 * 50 * 9.73 * 0.290 * KIP,  # 84.65 kip = 376.6
    live_deflection=5 * _L * 8400**4 / (384 * E_MPA * 171 * IN4),  # 28.4
    live_deflection_limit=8400 / 360,  # 23.3
    governing="live deflection",  # 28.4 / 23.3 = 1.22; flexure only 0.88
    status="inadequate",
)

# --- Edge joist, line 1 between A and B, W14X22: half of 2.5 m on one side and the slab's 0.30 m edge on the other
_D = FLOOR_D * 1.55 + 22 * PLF  # 5.9647 + 0.3211 = 6.286 kN/m
_L = FLOOR_L * 1.55  # 4.8239 kN/m
_W = factored(_D, _L)  # 7.543 + 7.718 = 15.261 kN/m
JOIST_EDGE = Fact(
    name="L1 joist AB 0.0",
    section="W14X22",
    span=8.4,
    tributary_width=1.55,
    tributary_area=1.55 * 8.4,  # 13.02
    dead_load=_D * 8.4,  # 52.80
    live_load=_L * 8.4,  # 40.52
    moment=_W * 8.4**2 / 8,  # 134.6
    moment_capacity=0.90 * 50 * 33.2 / 12 * KIP_FT,  # 124.5 kip-ft = 168.8
    shear=_W * 8.4 / 2,  # 64.1
    # h/t_w = 53.3 < 53.9, so phi = 1.00
    shear_capacity=1.00 * 0.6 * 50 * 13.7 * 0.230 * KIP,  # 94.53 kip = 420.5
    live_deflection=5 * _L * 8400**4 / (384 * E_MPA * 199 * IN4),  # 18.9
    live_deflection_limit=8400 / 360,  # 23.3
    governing="live deflection",  # 18.9 / 23.3 = 0.81; flexure 0.80
    status="adequate",
)

# --- Named W16X31, drawn as W16X26: the drawing counts. Line y = 11.5 m between A and B, width (2.0 + 2.0)/2
_D = FLOOR_D * 2.0 + 26 * PLF  # 7.6964 + 0.3794 = 8.076 kN/m
_L = FLOOR_L * 2.0  # 6.2244 kN/m
_W = factored(_D, _L)  # 9.691 + 9.959 = 19.650 kN/m
JOIST_MISNAMED = Fact(
    name="L1 joist AB 11.5",
    section="W16X26",
    span=8.4,
    tributary_width=2.0,
    tributary_area=2.0 * 8.4,  # 16.8
    dead_load=_D * 8.4,  # 67.84
    live_load=_L * 8.4,  # 52.29
    moment=_W * 8.4**2 / 8,  # 173.3
    moment_capacity=0.90 * 50 * 44.2 / 12 * KIP_FT,  # 224.7
    shear=_W * 8.4 / 2,  # 82.5
    shear_capacity=0.90 * 0.6 * 50 * 15.7 * 0.250 * KIP,  # 471.4
    live_deflection=5 * _L * 8400**4 / (384 * E_MPA * 301 * IN4),  # 16.1
    live_deflection_limit=8400 / 360,  # 23.3
    governing="flexure",  # 173.3 / 224.7 = 0.77
    status="adequate",
)

# --- Tail joist beside the stair opening, y = 5.0 m from girder A to the header at x = 2.8 m, W10X12, width 2.5
_D_TAIL = FLOOR_D * 2.5 + 12 * PLF  # 9.6205 + 0.1751 = 9.796 kN/m
_L_TAIL = FLOOR_L * 2.5  # 7.7805 kN/m
_W = factored(_D_TAIL, _L_TAIL)  # 11.755 + 12.449 = 24.204 kN/m
# The flange is non-compact: b_f/2t_f = 9.43 > 9.152. F3.2(a): M_p = 50 × 12.6 = 630 kip-in, 0.7 F_y S_x = 35 × 10.9 =
# 381.5; M_n = 630 - (630 - 381.5)(9.43 - 9.152)/(24.083 - 9.152) = 630 - 248.5 × 0.01865 = 625.4 kip-in
_M_N_W10X12 = 630 - 248.5 * (9.43 - 0.38 * 580**0.5) / (580**0.5 - 0.38 * 580**0.5)
TAIL_JOIST = Fact(
    name="L1 tail joist A 5.0",
    section="W10X12",
    span=2.8,
    tributary_width=2.5,
    tributary_area=2.5 * 2.8,  # 7.0
    dead_load=_D_TAIL * 2.8,  # 27.43
    live_load=_L_TAIL * 2.8,  # 21.79
    moment=_W * 2.8**2 / 8,  # 23.7
    moment_capacity=0.90 * _M_N_W10X12 / 12 * KIP_FT,  # 46.90 kip-ft = 63.6
    shear=_W * 2.8 / 2,  # 33.9
    shear_capacity=1.00 * 0.6 * 50 * 9.87 * 0.190 * KIP,  # 56.26 kip = 250.3
    live_deflection=5 * _L_TAIL * 2800**4 / (384 * E_MPA * 53.8 * IN4),  # 1.4
    live_deflection_limit=2800 / 360,  # 7.8
    governing="flexure",  # 23.7 / 63.6 = 0.37
    status="adequate",
)

# --- Header of the stair opening, x = 2.8 m from y = 2.5 to line 2, W12X16: the tail joist at midspan, no slab
_P_D = _D_TAIL * 1.4  # 9.796 × 2.8/2 = 13.714 kN
_P_L = _L_TAIL * 1.4  # 10.893 kN
_P = factored(_P_D, _P_L)  # 16.457 + 17.428 = 33.885 kN
_SW = 16 * PLF  # 0.2335 kN/m
STAIR_HEADER = Fact(
    name="L1 stair header",
    section="W12X16",
    span=5.0,
    tributary_width=1.4,  # half of the tail joist, on one side
    tributary_area=3.5,  # half of the tail joist's 7.0 m²
    dead_load=_P_D + _SW * 5.0,  # 13.714 + 1.168 = 14.88
    live_load=_P_L,  # 10.89
    moment=_P * 5.0 / 4 + 1.2 * _SW * 5.0**2 / 8,  # 42.36 + 0.88 = 43.2
    moment_capacity=0.90 * 50 * 20.1 / 12 * KIP_FT,  # 75.38 kip-ft = 102.2
    shear=_P / 2 + 1.2 * _SW * 2.5,  # 16.94 + 0.70 = 17.6
    shear_capacity=1.00 * 0.6 * 50 * 12.0 * 0.220 * KIP,  # 79.2 kip = 352.3
    live_deflection=_P_L * 1000 * 5000**3 / (48 * E_MPA * 103 * IN4),  # 3.3
    live_deflection_limit=5000 / 360,  # 13.9
    governing="flexure",  # 43.2 / 102.2 = 0.42
    status="adequate",
)

# --- Trimmer beside the stair opening, y = 2.5 m between A and B, W16X31. Slab on its south side all along (1.25 m),
#     on its north side only from A to the header (width 1.25 over 2.8 m), where the header's reaction comes in.
_D_ALL = FLOOR_D * 1.25 + 31 * PLF  # 4.8103 + 0.4524 = 5.263 kN/m over 8.4 m
_L_ALL = FLOOR_L * 1.25  # 3.8903 kN/m
_H_D = _P_D / 2 + _SW * 2.5  # header: 6.857 + 0.584 = 7.441 kN at 2.8 m
_H_L = _P_L / 2  # 5.446 kN
_W_ALL = factored(_D_ALL, _L_ALL)  # 6.315 + 6.224 = 12.540 kN/m
_W_PART = factored(FLOOR_D * 1.25, FLOOR_L * 1.25)  # 5.772 + 6.224 = 11.997 kN/m over the first 2.8 m
_H = factored(_H_D, _H_L)  # 8.929 + 8.714 = 17.643 kN
# Reaction at B: 12.540 × 4.2 + 11.997 × 2.8 × 1.4/8.4 + 17.643 × 2.8/8.4 = 52.67 + 5.60 + 5.88 = 64.15 kN
_R_B = _W_ALL * 4.2 + _W_PART * 2.8 * 1.4 / 8.4 + _H * 2.8 / 8.4
# Reaction at A: all of it, 105.33 + 33.59 + 17.64 = 156.57, less that = 92.42 kN
_R_A = _W_ALL * 8.4 + _W_PART * 2.8 + _H - _R_B
# No shear at 64.15/12.540 = 5.12 m from B, short of the header at 5.6 m: M = R_B²/2w
TRIMMER = Fact(
    name="L1 joist AB 2.5",
    section="W16X31",
    span=8.4,
    tributary_width=None,
    tributary_area=1.25 * 8.4 + 1.25 * 2.8 + 1.75,  # 10.5 + 3.5 + half of the header's 3.5 = 15.75
    dead_load=_D_ALL * 8.4 + FLOOR_D * 1.25 * 2.8 + _H_D,  # 44.21 + 13.47 + 7.44 = 65.12
    live_load=_L_ALL * 8.4 + FLOOR_L * 1.25 * 2.8 + _H_L,  # 32.68 + 10.89 + 5.45 = 49.02
    moment=_R_B**2 / (2 * _W_ALL),  # 164.1
    moment_capacity=0.90 * 50 * 54.0 / 12 * KIP_FT,  # 202.5 kip-ft = 274.6
    shear=_R_A,  # 92.4
    shear_capacity=1.00 * 0.6 * 50 * 15.9 * 0.275 * KIP,  # 131.2 kip = 583.5
    live_deflection=None,
    live_deflection_limit=8400 / 360,  # 23.3
    governing="flexure",  # 164.1 / 274.6 = 0.60
    status="adequate",
)

# --- Interior girder beside the opening, B between lines 1 and 2, W21X44: at 2.5 m the trimmer's reaction at B and the
#     joist BC 2.5 (W16X26), at 5.0 m the joist BC 5.0 (W16X26) alone
_J_D = (FLOOR_D * 2.5 + 26 * PLF) * 4.2  # 10.000 × 8.4/2 = 42.00 kN
_J_L = FLOOR_L * 2.5 * 4.2  # 32.68 kN
_T_D = _D_ALL * 4.2 + FLOOR_D * 1.25 * 2.8 * 1.4 / 8.4 + _H_D * 2.8 / 8.4  # 22.10 + 2.24 + 2.48 = 26.83 kN
_T_L = _L_ALL * 4.2 + FLOOR_L * 1.25 * 2.8 * 1.4 / 8.4 + _H_L * 2.8 / 8.4  # 16.34 + 1.82 + 1.82 = 19.97 kN
_P1 = factored(_J_D, _J_L) + _R_B  # 102.69 + 64.15 = 166.83 kN
_P2 = factored(_J_D, _J_L)  # 102.69 kN
_SW = 44 * PLF  # 0.6421 kN/m
_R1 = (2 * _P1 + _P2) / 3 + 1.2 * _SW * 3.75  # 145.45 + 2.89 = 148.34 kN
# The shear changes sign at the first joist: 148.34 - 1.9 - 166.8 < 0
GIRDER_BESIDE_OPENING = Fact(
    name="L1 girder B 1-2",
    section="W21X44",
    span=7.5,
    tributary_width=8.4,  # 8.4/2 + 8.4/2
    # joists 10.5 + 10.5; trimmer at B: 10.5/2 + 3.5 × 1.4/8.4 + 1.75 × 2.8/8.4 = 5.25 + 0.583 + 0.583
    tributary_area=10.5 + 10.5 + 5.25 + 3.5 / 6 + 1.75 / 3,  # 27.42
    dead_load=2 * _J_D + _T_D + _SW * 7.5,  # 84.00 + 26.83 + 4.82 = 115.6
    live_load=2 * _J_L + _T_L,  # 65.36 + 19.97 = 85.3
    moment=_R1 * 2.5 - 1.2 * _SW * 2.5**2 / 2,  # 370.8 - 2.4 = 368.4
    moment_capacity=0.90 * 50 * 95.4 / 12 * KIP_FT,  # 357.75 kip-ft = 485.0
    shear=_R1,  # 148.3
    shear_capacity=1.00 * 0.6 * 50 * 20.7 * 0.350 * KIP,  # 217.35 kip = 966.8
    live_deflection=None,
    live_deflection_limit=7500 / 360,  # 20.8
    governing="flexure",  # 368.4 / 485.0 = 0.76
    status="adequate",
)

# --- Interior girder, C between lines 1 and 2, W18X35: joists of 8.4 m (W16X26) and 7.2 m (W14X22) at the third points
_P_D = _J_D + (FLOOR_D * 2.5 + 22 * PLF) * 3.6  # 42.00 + 9.942 × 3.6 = 77.79 kN
_P_L = _J_L + FLOOR_L * 2.5 * 3.6  # 32.68 + 28.01 = 60.69 kN
_P = factored(_P_D, _P_L)  # 93.35 + 97.10 = 190.45 kN
_SW = 35 * PLF  # 0.5108 kN/m
GIRDER_INTERIOR = Fact(
    name="L1 girder C 1-2",
    section="W18X35",
    span=7.5,
    tributary_width=7.8,  # 8.4/2 + 7.2/2
    tributary_area=2 * (10.5 + 9.0),  # 39.0
    dead_load=2 * _P_D + _SW * 7.5,  # 155.58 + 3.83 = 159.4
    live_load=2 * _P_L,  # 121.4
    moment=_P * 2.5 + 1.2 * _SW * 7.5**2 / 8,  # 476.1 + 4.3 = 480.4
    moment_capacity=0.90 * 50 * 66.5 / 12 * KIP_FT,  # 249.4 kip-ft = 338.1
    shear=_P + 1.2 * _SW * 3.75,  # 190.45 + 2.30 = 192.7
    shear_capacity=1.00 * 0.6 * 50 * 17.7 * 0.300 * KIP,  # 159.3 kip = 708.6
    live_deflection=23 * _P_L * 1000 * 7500**3 / (648 * E_MPA * 510 * IN4),  # 21.4
    live_deflection_limit=7500 / 360,  # 20.8
    governing="flexure",  # 480.4 / 338.1 = 1.42; live deflection 1.03
    status="inadequate",
)

# --- Edge girder, A between lines 2 and 3, W16X26: joists W14X26 and W16X26 (26 plf both) at 2.0 and 4.0 m
_P_D = (FLOOR_D * 2.0 + 26 * PLF) * 4.2  # 8.076 × 8.4/2 = 33.92 kN
_P_L = FLOOR_L * 2.0 * 4.2  # 26.14 kN
_P = factored(_P_D, _P_L)  # 40.70 + 41.83 = 82.53 kN
_SW = 26 * PLF  # 0.3794 kN/m
GIRDER_EDGE = Fact(
    name="L1 girder A 2-3",
    section="W16X26",
    span=6.0,
    tributary_width=4.2,  # 8.4/2, one side
    tributary_area=2 * 8.4,  # 16.8
    dead_load=2 * _P_D + _SW * 6.0,  # 67.84 + 2.28 = 70.1
    live_load=2 * _P_L,  # 52.3
    moment=_P * 2.0 + 1.2 * _SW * 6.0**2 / 8,  # 165.1 + 2.0 = 167.1
    moment_capacity=0.90 * 50 * 44.2 / 12 * KIP_FT,  # 224.7
    shear=_P + 1.2 * _SW * 3.0,  # 82.53 + 1.37 = 83.9
    shear_capacity=0.90 * 0.6 * 50 * 15.7 * 0.250 * KIP,  # 471.4
    live_deflection=23 * _P_L * 1000 * 6000**3 / (648 * E_MPA * 301 * IN4),  # 8.0
    live_deflection_limit=6000 / 360,  # 16.7
    governing="flexure",  # 167.1 / 224.7 = 0.74
    status="adequate",
)

# --- Shallow roof joist, line y = 5.0 m between B and C, W8X13
_D = ROOF_D * 2.5 + 13 * PLF  # 1.1575 + 0.1897 = 1.347 kN/m
_L = ROOF_L * 2.5  # 2.3940 kN/m
_W = factored(_D, _L)  # 1.617 + 3.830 = 5.447 kN/m
ROOF_JOIST_SHALLOW = Fact(
    name="Roof joist BC 5.0",
    section="W8X13",
    span=8.4,
    tributary_width=2.5,
    tributary_area=2.5 * 8.4,  # 21.0
    dead_load=_D * 8.4,  # 11.32
    live_load=_L * 8.4,  # 20.11
    moment=_W * 8.4**2 / 8,  # 48.0
    moment_capacity=0.90 * 50 * 11.4 / 12 * KIP_FT,  # 42.75 kip-ft = 58.0
    shear=_W * 8.4 / 2,  # 22.9
    shear_capacity=1.00 * 0.6 * 50 * 7.99 * 0.230 * KIP,  # 55.13 kip = 245.2
    live_deflection=5 * _L * 8400**4 / (384 * E_MPA * 39.6 * IN4),  # 47.1
    live_deflection_limit=8400 / 240,  # 35.0
    governing="live deflection",  # 47.1 / 35.0 = 1.35; flexure 0.83
    status="inadequate",
)

# --- Interior roof girder, C between lines 1 and 2, W14X22: at 2.5 m joists BC 2.5 (W12X14) and CD 2.5 (W10X12), at
#     5.0 m joists BC 5.0 (W8X13) and CD 5.0 (W10X12)
_CD = (ROOF_D * 2.5 + 12 * PLF) * 3.6  # (1.1575 + 0.1751) × 3.6 = 4.797 kN
_D1 = (ROOF_D * 2.5 + 14 * PLF) * 4.2 + _CD  # 5.720 + 4.797 = 10.517 kN
_D2 = (ROOF_D * 2.5 + 13 * PLF) * 4.2 + _CD  # 5.658 + 4.797 = 10.455 kN
_P_L = ROOF_L * 2.5 * (4.2 + 3.6)  # 18.673 kN at both
_P1, _P2 = factored(_D1, _P_L), factored(_D2, _P_L)  # 42.497 and 42.424 kN
_SW = 22 * PLF  # 0.3211 kN/m
_R1 = (2 * _P1 + _P2) / 3 + 1.2 * _SW * 3.75  # 42.473 + 1.445 = 43.918 kN
_X = (_R1 - _P1) / (1.2 * _SW)  # no shear at 1.421/0.385 = 3.69 m, between the joists
ROOF_GIRDER = Fact(
    name="Roof girder C 1-2",
    section="W14X22",
    span=7.5,
    tributary_width=7.8,  # 8.4/2 + 7.2/2
    tributary_area=2 * (10.5 + 9.0),  # 39.0
    dead_load=_D1 + _D2 + _SW * 7.5,  # 10.52 + 10.46 + 2.41 = 23.4
    live_load=2 * _P_L,  # 37.3
    moment=_R1 * _X - _P1 * (_X - 2.5) - 1.2 * _SW * _X**2 / 2,  # 108.9
    moment_capacity=0.90 * 50 * 33.2 / 12 * KIP_FT,  # 168.8
    shear=_R1,  # 43.9
    shear_capacity=1.00 * 0.6 * 50 * 13.7 * 0.230 * KIP,  # 420.5
    live_deflection=23 * _P_L * 1000 * 7500**3 / (648 * E_MPA * 199 * IN4),  # 16.9
    live_deflection_limit=7500 / 240,  # 31.25
    governing="flexure",  # 108.9 / 168.8 = 0.64
    status="adequate",
)

OFFICE_FACTS = (
    JOIST_BC,
    JOIST_A36,
    JOIST_SHALLOW,
    JOIST_EDGE,
    JOIST_MISNAMED,
    TAIL_JOIST,
    STAIR_HEADER,
    TRIMMER,
    GIRDER_BESIDE_OPENING,
    GIRDER_INTERIOR,
    GIRDER_EDGE,
    ROOF_JOIST_SHALLOW,
    ROOF_GIRDER,
)
# 12 girders, 20 floor joists, 21 roof joists, header and tail joist, canopy arm, lintel, bolt, plate and railing
OFFICE_CANDIDATES = 12 + 20 + 21 + 2 + 2 + 3
# All others are adequate; the most used of them are the joists BC 2.5 and BC 5.0, at 0.96.
OFFICE_INADEQUATE = frozenset({"L1 joist CD 5.0", "L1 joist BC 9.5", "L1 girder C 1-2", "Roof joist BC 5.0"})
OFFICE_NOT_CHECKED = frozenset({"Canopy arm A2", "Entrance lintel"})
OFFICE_SET_ASIDE = frozenset({"Bolt M20x75", "End plate PL12x200x300", "Stair railing"})
OFFICE_ASSUMED_GRADE = frozenset({"L1 joist BC 5.0"})  # its material says "Steel" only
OFFICE_FLOOR_AREA = 24.0 * 13.8 - 5.6 * 5.0  # 331.2 less the stair opening = 303.2 m²
OFFICE_ROOF_AREA = 24.0 * 13.8  # 331.2 m²
OFFICE_LIVE = OFFICE_FLOOR_AREA * FLOOR_L + OFFICE_ROOF_AREA * ROOF_L  # 943.6 + 317.2 = 1260.8 kN applied

# ------------------------------------------------------------------- Millrace workshop, customary units: kip, ft, in
# Roof: roofing 0.5 in × 72 pcf + insulation 4 in × 1.5 + deck 1.5 in × 20 = 3.0 + 0.5 + 2.5 = 6 psf; + 5 = 11 psf dead
# Loft: concrete 4.5 in × 144 pcf = 54 psf; + 5 = 59 psf dead; 50 + 15 = 65 psf live
# Joists every 7 ft: roof 77 plf dead and 140 plf live, loft 413 plf and 455 plf

# --- Roof joist S7, from the masonry wall to the girder at y = 20 ft, W8X10. Non-compact flange: b_f/2t_f = 9.61.
# F3.2(a): M_p = 50 × 8.87 = 443.5 kip-in, 0.7 F_y S_x = 35 × 7.81 = 273.35;
# M_n = 443.5 - 170.15 (9.61 - 9.152)/(24.083 - 9.152) = 443.5 - 170.15 × 0.0307 = 438.3 kip-in
_M_N_W8X10 = 443.5 - 170.15 * (9.61 - 0.38 * 580**0.5) / (580**0.5 - 0.38 * 580**0.5)
_W = (1.2 * (77 + 10) + 1.6 * 140) / 1000  # 0.1044 + 0.2240 = 0.3284 kip/ft
HALL_JOIST = Fact(
    name="Roof joist S7",
    section="W8X10",
    span=20.0,
    tributary_width=7.0,
    tributary_area=7.0 * 20.0,  # 140
    dead_load=0.087 * 20,  # 1.74
    live_load=0.140 * 20,  # 2.80
    moment=_W * 20**2 / 8,  # 16.42
    moment_capacity=0.90 * _M_N_W8X10 / 12,  # 32.87
    shear=_W * 10,  # 3.284
    shear_capacity=1.00 * 0.6 * 50 * 7.89 * 0.170,  # 40.24
    live_deflection=5 * (0.140 / 12) * 240**4 / (384 * 29000 * 30.8),  # 0.564
    live_deflection_limit=240 / 240,  # 1.00
    governing="live deflection",  # 0.56; flexure 0.50
    status="adequate",
)

# --- Roof joist S35, the same place in the next bay, a channel C6X8.2
_W = (1.2 * (77 + 8.2) + 1.6 * 140) / 1000  # 0.10224 + 0.2240 = 0.32624 kip/ft
HALL_CHANNEL = Fact(
    name="Roof joist S35",
    section="C6X8.2",
    span=20.0,
    tributary_width=7.0,
    tributary_area=7.0 * 20.0,  # 140
    dead_load=0.0852 * 20,  # 1.704
    live_load=0.140 * 20,  # 2.80
    moment=_W * 20**2 / 8,  # 16.31
    moment_capacity=0.90 * 50 * 5.16 / 12,  # 19.35
    shear=_W * 10,  # 3.262
    shear_capacity=0.90 * 0.6 * 50 * 6.00 * 0.200,  # 32.4; a channel's web has phi = 0.90
    live_deflection=5 * (0.140 / 12) * 240**4 / (384 * 29000 * 13.1),  # 1.327
    live_deflection_limit=240 / 240,  # 1.00
    governing="live deflection",  # 1.33; flexure 0.84
    status="inadequate",
)

# --- Interior roof girder PQ at y = 20 ft, W14X22: joists of 20 and 18 ft (W8X10) at the quarter points
_P_D = 0.087 * (10 + 9)  # 1.653 kip
_P_L = 0.140 * (10 + 9)  # 2.660 kip
_P = factored(_P_D, _P_L)  # 1.984 + 4.256 = 6.240 kip
HALL_GIRDER = Fact(
    name="Roof girder PQ 20",
    section="W14X22",
    span=28.0,
    tributary_width=19.0,  # 20/2 + 18/2
    tributary_area=3 * 7.0 * 19.0,  # 399
    dead_load=3 * _P_D + 0.022 * 28,  # 4.959 + 0.616 = 5.575
    live_load=3 * _P_L,  # 7.98
    moment=_P * 28 / 2 + 1.2 * 0.022 * 28**2 / 8,  # 87.35 + 2.59 = 89.94
    moment_capacity=0.90 * 50 * 33.2 / 12,  # 124.5
    shear=1.5 * _P + 1.2 * 0.022 * 14,  # 9.36 + 0.37 = 9.73
    shear_capacity=1.00 * 0.6 * 50 * 13.7 * 0.230,  # 94.53
    live_deflection=19 * _P_L * 336**3 / (384 * 29000 * 199),  # 0.865
    live_deflection_limit=336 / 240,  # 1.40
    governing="flexure",  # 89.94 / 124.5 = 0.72
    status="adequate",
)

# --- Interior roof girder QR at y = 20 ft, W12X16: the channel S35 weighs 8.2 plf, all other joists 10 plf
_P1 = factored(0.0852 * 10 + 0.087 * 9, _P_L)  # 1.2 × 1.635 + 4.256 = 6.218 kip at 7 ft
_R2 = (_P1 * 7 + _P * 14 + _P * 21) / 28 + 1.2 * 0.016 * 14  # 1.5545 + 3.120 + 4.680 + 0.2688 = 9.623 kip
# Greatest at midspan, under the second joist: from the right, 9.623 × 14 - 6.240 × 7 - 0.0192 × 14²/2
HALL_GIRDER_SMALL = Fact(
    name="Roof girder QR 20",
    section="W12X16",
    span=28.0,
    tributary_width=19.0,
    tributary_area=3 * 7.0 * 19.0,  # 399
    dead_load=3 * _P_D - 0.0018 * 10 + 0.016 * 28,  # 4.959 - 0.018 + 0.448 = 5.389
    live_load=3 * _P_L,  # 7.98
    moment=_R2 * 14 - _P * 7 - 1.2 * 0.016 * 14**2 / 2,  # 134.72 - 43.68 - 1.88 = 89.16
    moment_capacity=0.90 * 50 * 20.1 / 12,  # 75.38
    shear=_R2,  # 9.623
    shear_capacity=1.00 * 0.6 * 50 * 12.0 * 0.220,  # 79.2
    live_deflection=19 * _P_L * 336**3 / (384 * 29000 * 103),  # 1.671
    live_deflection_limit=336 / 240,  # 1.40
    governing="live deflection",  # 1.671 / 1.40 = 1.19; flexure 1.18
    status="inadequate",
)

# --- Loft joist at x = 7 ft, W12X14, and its neighbour at x = 14 ft in A36
_W = (1.2 * (413 + 14) + 1.6 * 455) / 1000  # 0.5124 + 0.7280 = 1.2404 kip/ft
LOFT_JOIST = Fact(
    name="Loft joist 7",
    section="W12X14",
    span=18.0,
    tributary_width=7.0,
    tributary_area=7.0 * 18.0,  # 126
    dead_load=0.427 * 18,  # 7.686
    live_load=0.455 * 18,  # 8.190
    moment=_W * 18**2 / 8,  # 50.24
    moment_capacity=0.90 * 50 * 17.4 / 12,  # 65.25
    shear=_W * 9,  # 11.16
    # h/t_w = 54.3 > 53.9, so phi = 0.90
    shear_capacity=0.90 * 0.6 * 50 * 11.9 * 0.200,  # 64.26
    live_deflection=5 * (0.455 / 12) * 216**4 / (384 * 29000 * 88.6),  # 0.418
    live_deflection_limit=216 / 360,  # 0.60
    governing="flexure",  # 50.24 / 65.25 = 0.77
    status="adequate",
)
LOFT_JOIST_A36 = Fact(
    name="Loft joist 14",
    section="W12X14",
    grade="A36",
    span=18.0,
    tributary_width=7.0,
    tributary_area=7.0 * 18.0,  # 126
    dead_load=0.427 * 18,  # 7.686
    live_load=0.455 * 18,  # 8.190
    moment=_W * 18**2 / 8,  # 50.24
    moment_capacity=0.90 * 36 * 17.4 / 12,  # 46.98
    shear=_W * 9,  # 11.16
    # h/t_w = 54.3 < 2.24 √(29 000/36) = 63.6, so phi = 1.00
    shear_capacity=1.00 * 0.6 * 36 * 11.9 * 0.200,  # 51.41
    live_deflection=5 * (0.455 / 12) * 216**4 / (384 * 29000 * 88.6),  # 0.418
    live_deflection_limit=216 / 360,  # 0.60
    governing="flexure",  # 50.24 / 46.98 = 1.07
    status="inadequate",
)

# --- Loft edge joist at x = 0, channel C10X15.3 between columns, half of 7 ft
_W = (1.2 * (206.5 + 15.3) + 1.6 * 227.5) / 1000  # 0.26616 + 0.3640 = 0.63016 kip/ft
LOFT_EDGE = Fact(
    name="Loft joist 0",
    section="C10X15.3",
    span=18.0,
    tributary_width=3.5,
    tributary_area=3.5 * 18.0,  # 63
    dead_load=0.2218 * 18,  # 3.992
    live_load=0.2275 * 18,  # 4.095
    moment=_W * 18**2 / 8,  # 25.52
    moment_capacity=0.90 * 50 * 15.9 / 12,  # 59.63
    shear=_W * 9,  # 5.671
    shear_capacity=0.90 * 0.6 * 50 * 10.0 * 0.240,  # 64.8
    live_deflection=5 * (0.2275 / 12) * 216**4 / (384 * 29000 * 67.3),  # 0.275
    live_deflection_limit=216 / 360,  # 0.60
    governing="live deflection",  # 0.275 / 0.60 = 0.46; flexure 0.43
    status="adequate",
)

# --- Loft girder at y = 20 ft, W14X22: joists W12X14 of 18 ft on one side, at the quarter points
_P_D = 0.427 * 9  # 3.843 kip
_P_L = 0.455 * 9  # 4.095 kip
_P = factored(_P_D, _P_L)  # 4.612 + 6.552 = 11.164 kip
LOFT_GIRDER = Fact(
    name="Loft girder 20",
    section="W14X22",
    span=28.0,
    tributary_width=9.0,  # 18/2, one side
    tributary_area=3 * 7.0 * 9.0,  # 189
    dead_load=3 * _P_D + 0.022 * 28,  # 11.529 + 0.616 = 12.145
    live_load=3 * _P_L,  # 12.285
    moment=_P * 28 / 2 + 1.2 * 0.022 * 28**2 / 8,  # 156.29 + 2.59 = 158.9
    moment_capacity=0.90 * 50 * 33.2 / 12,  # 124.5
    shear=1.5 * _P + 1.2 * 0.022 * 14,  # 16.75 + 0.37 = 17.12
    shear_capacity=1.00 * 0.6 * 50 * 13.7 * 0.230,  # 94.53
    live_deflection=19 * _P_L * 336**3 / (384 * 29000 * 199),  # 1.332
    live_deflection_limit=336 / 360,  # 0.933
    governing="live deflection",  # 1.43; flexure 1.28
    status="inadequate",
)

# --- Girder of the paint store, turned by 30 degrees, W10X12: joists every 5.5 ft of 15 ft on one side; the one in the
#     middle is a W6X15, the others W8X10. Roof: 11 × 5.5 = 60.5 plf dead, 20 × 5.5 = 110 plf live.
_P_D = 0.0705 * 7.5  # (60.5 + 10) plf × 15/2 = 0.52875 kip
_M_D = 0.0755 * 7.5  # (60.5 + 15) plf × 15/2 = 0.56625 kip, at midspan
_P_L = 0.110 * 7.5  # 0.825 kip
_P, _M = factored(_P_D, _P_L), factored(_M_D, _P_L)  # 1.9545 and 1.9995 kip
STORE_GIRDER = Fact(
    name="Store girder 0",
    section="W10X12",
    span=22.0,
    tributary_width=7.5,  # 15/2, one side
    tributary_area=3 * 5.5 * 7.5,  # 123.75
    dead_load=2 * _P_D + _M_D + 0.012 * 22,  # 1.624 + 0.264 = 1.888
    live_load=3 * _P_L,  # 2.475
    # two loads at the quarter points and one at midspan: P L/4 + P' L/4 + w L²/8
    moment=_P * 22 / 4 + _M * 22 / 4 + 1.2 * 0.012 * 22**2 / 8,  # 10.750 + 10.997 + 0.871 = 22.62
    moment_capacity=0.90 * _M_N_W10X12 / 12,  # 46.90
    shear=_P + _M / 2 + 1.2 * 0.012 * 11,  # 1.954 + 1.000 + 0.158 = 3.113
    shear_capacity=1.00 * 0.6 * 50 * 9.87 * 0.190,  # 56.26
    live_deflection=19 * _P_L * 264**3 / (384 * 29000 * 53.8),  # 0.481
    live_deflection_limit=264 / 240,  # 1.10
    governing="flexure",  # 22.62 / 46.90 = 0.48
    status="adequate",
)

WORKSHOP_FACTS = (
    HALL_JOIST,
    HALL_CHANNEL,
    HALL_GIRDER,
    HALL_GIRDER_SMALL,
    LOFT_JOIST,
    LOFT_JOIST_A36,
    LOFT_EDGE,
    LOFT_GIRDER,
    STORE_GIRDER,
)
# 4 roof girders, 18 roof joists, 2 loft girders, 5 loft joists, 2 store girders, 5 store joists
WORKSHOP_CANDIDATES = 4 + 18 + 2 + 5 + 2 + 5
# All others are adequate; the most used of them is the loft girder at y = 38 ft, at 0.96.
WORKSHOP_INADEQUATE = frozenset({"Roof joist S35", "Roof girder QR 20", "Loft joist 14", "Loft girder 20"})
WORKSHOP_ROOF_AREA = 56.0 * 38.0 + 22.0 * 15.0  # 2128 + 330 = 2458 ft²
WORKSHOP_LOFT_AREA = 28.0 * 18.0  # 504 ft²
WORKSHOP_LIVE = 0.020 * WORKSHOP_ROOF_AREA + 0.065 * WORKSHOP_LOFT_AREA  # 49.16 + 32.76 = 81.92 kip applied
