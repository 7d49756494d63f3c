package sky

// meanObliquity returns the obliquity of the ecliptic of date on the mean equator, in radians.
//
// Given:    t, Julian centuries of TT since J2000.0
// Source:   Capitaine, Wallace & Chapront 2003, A&A 412, 567, eq. 37; IAU 2006
// Checked:  TestEcliptic (AST-066)
func meanObliquity(t float64) float64 {
	return (84381.406 + t*(-46.836769+t*(-0.0001831+t*(0.00200340+t*(-0.000000576-t*0.0000000434))))) * radPerSec
}

// obliquityJ2000 is the obliquity of the ecliptic at J2000.0, IAU 2006.
const obliquityJ2000 = 84381.406 * radPerSec

// precessionMatrix returns the rotation from the mean equator and equinox of J2000.0 to those of date.
//
//	R₃(χ) R₁(−ω) R₃(−ψ) R₁(ε₀): along the fixed ecliptic by ψ, down to the equator of date by ω, and
//	along that by χ to the equinox of date
//
// Given:    t, Julian centuries of TT since J2000.0
// Source:   Capitaine, Wallace & Chapront 2003, A&A 412, 567, eq. 37 and 39; IAU 2006
// Checked:  TestBookPrecession, TestAzEl
func precessionMatrix(t float64) mat {
	psi := t * (5038.481507 + t*(-1.0790069+t*(-0.00114045+t*(0.000132851-t*0.0000000951))))
	omega := 84381.406 + t*(-0.025754+t*(0.0512623+t*(-0.00772503+t*(-0.000000467+t*0.0000003337))))
	chi := t * (10.556403 + t*(-2.3814292+t*(-0.00121197+t*(0.000170663-t*0.0000000560))))
	fixed := chain(aboutX(-omega*radPerSec), aboutZ(-psi*radPerSec), aboutX(obliquityJ2000))
	return aboutZ(chi * radPerSec).after(&fixed)
}
