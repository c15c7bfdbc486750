using System.Numerics;

namespace Pipeline.Numerics;

/// <summary>The convolution of a Gaussian and a Lorentzian.</summary>
static class Voigt
{
    /// <summary>Density at <paramref name="x"/>; integrates to 1. Error below 1e-15 of the Gaussian's peak.</summary>
    /// <param name="x">Distance from the centre.</param>
    /// <param name="sigma">Rms of the Gaussian, &gt;= 0.</param>
    /// <param name="gamma">Half width at half maximum of the Lorentzian, &gt;= 0, not zero together with sigma.</param>
    public static double Density(double x, double sigma, double gamma)
    {
        if (!(sigma >= 0)) throw new ArgumentOutOfRangeException(nameof(sigma), sigma, "must be >= 0");
        if (!(gamma >= 0) || (sigma == 0 && gamma == 0)) throw new ArgumentOutOfRangeException(nameof(gamma), gamma, "must be >= 0, and positive where sigma is 0");
        if (sigma == 0) return gamma / (Math.PI * (x * x + gamma * gamma));
        if (gamma == 0) return Math.Exp(-0.5 * x * x / (sigma * sigma)) / (sigma * Math.Sqrt(2 * Math.PI));
        Complex w = Faddeeva.W(new Complex(x, gamma) / (sigma * Math.Sqrt(2)));
        // beyond ten sigma of an almost pure Gaussian rounding can leave -1e-17 of the peak
        return Math.Max(0, w.Real) / (sigma * Math.Sqrt(2 * Math.PI));
    }
}
