using System.Numerics;

namespace Pipeline.Numerics;

/// <summary>w(z) = exp(-z^2) erfc(-iz) in the upper half plane.</summary>
/// <remarks>Rational expansion of Weideman, SIAM J. Numer. Anal. 31, 1497 (1994), with 64 terms; for large arguments the continued fraction
/// of Laplace. Error below 2e-15 of |w| at 1,500 points against 40 digits; next to the real axis the real part is known to that share of |w|,
/// not of itself.</remarks>
static class Faddeeva
{
    const int Terms = 64;
    static readonly double Scale = Math.Sqrt(Terms / Math.Sqrt(2));
    static readonly double[] Coefficients = Expand();

    /// <param name="z">Finite, imaginary part &gt;= 0.</param>
    public static Complex W(Complex z)
    {
        if (!(z.Imaginary >= 0) || !Complex.IsFinite(z)) throw new ArgumentOutOfRangeException(nameof(z), z, "must be finite and lie in the upper half plane");
        if (z.Magnitude > 12) return Fraction(z);
        Complex below = Scale - Complex.ImaginaryOne * z, ratio = (Scale + Complex.ImaginaryOne * z) / below, sum = 0;
        for (int k = Terms - 1; k >= 0; k--) sum = sum * ratio + Coefficients[k];
        return 2 * sum / (below * below) + 1 / (Math.Sqrt(Math.PI) * below);
    }

    static Complex Fraction(Complex z)
    {
        Complex tail = z;
        for (int k = 40; k >= 1; k--) tail = z - 0.5 * k / tail;
        return Complex.ImaginaryOne / (Math.Sqrt(Math.PI) * tail);
    }

    /// <summary>Fourier coefficients of exp(-t^2)(L^2 + t^2) on the circle t = L tan(theta/2).</summary>
    static double[] Expand()
    {
        const int Points = 4 * Terms;
        var coefficients = new double[Terms];
        for (int n = 1; n <= Terms; n++)
        {
            double sum = 0;
            for (int k = -Points + 1; k < Points; k++)
            {
                double theta = k * Math.PI / Points, t = Scale * Math.Tan(0.5 * theta);
                sum += Math.Exp(-t * t) * (Scale * Scale + t * t) * Math.Cos(n * theta);
            }
            coefficients[n - 1] = sum / (2 * Points);
        }
        return coefficients;
    }
}
