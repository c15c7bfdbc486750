using MathNet.Numerics;
using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>Gamma pulse: t^(k-1) exp(-t/theta), a rise as a power of time and an exponential fall.</summary>
/// <remarks>The shares before t are P(k, x), x = t/theta, the regularised incomplete gamma function; their integral is
/// t P(k, x) - k theta P(k + 1, x), with P(k + 1, x) = P(k, x) - x^k exp(-x)/Gamma(k + 1) (DLMF 8.8.5), which needs P only once.</remarks>
public sealed record GammaEmission : EmissionProfile
{
    /// <summary>ln 1e15.</summary>
    const double Rare = 34.54;

    /// <summary>k, no unit; 1 is the exponential pulse.</summary>
    public required Measured Shape { get; init => field = Guard.Positive(value); }
    /// <summary>theta, s.</summary>
    public required Measured Scale { get; init => field = Guard.Positive(value); }
    public override string Name => "gamma";
    public override double MeanTime => Delay.Value + Shape.Value * Scale.Value;

    /// <remarks>A gamma variable of unit scale exceeds k + sqrt(2 k a) + a with less than exp(-a) (Boucheron, Lugosi and Massart 2013,
    /// Concentration Inequalities, section 2.4).</remarks>
    public override (double Low, double High) Support =>
        (Delay.Value, Delay.Value + Scale.Value * (Shape.Value + Math.Sqrt(2 * Rare * Shape.Value) + Rare));

    public override double CumulativeAt(double time)
    {
        double x = (time - Delay.Value) / Scale.Value;
        return x <= 0 ? 0 : SpecialFunctions.GammaLowerRegularized(Shape.Value, x);
    }

    public override double IntegratedCumulativeAt(double time)
    {
        double k = Shape.Value, x = (time - Delay.Value) / Scale.Value;
        if (x <= 0) return 0;
        double share = SpecialFunctions.GammaLowerRegularized(k, x), step = Math.Exp(k * Math.Log(x) - x - SpecialFunctions.GammaLn(k + 1));
        return Scale.Value * ((x - k) * share + k * step);
    }

    /// <summary>Places at which the pulse is tabulated for a filter: close together at its beginning, where it may rise suddenly.</summary>
    internal double[] Places()
    {
        const int Pieces = 1200;
        (double low, double high) = Support;
        return [.. Enumerable.Range(0, Pieces + 1).Select(j => low + (high - low) * Math.Pow((double)j / Pieces, 3))];
    }
}
