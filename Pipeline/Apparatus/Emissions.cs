using MathNet.Numerics;
using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>All molecules leave at one instant.</summary>
public sealed record InstantEmission : EmissionProfile
{
    public override string Name => "instant";
    public override double MeanTime => Delay.Value;
    public override (double Low, double High) Support => (Delay.Value, Delay.Value);
    public override double CumulativeAt(double time) => time >= Delay.Value ? 1 : 0;
    public override double IntegratedCumulativeAt(double time) => Math.Max(0, time - Delay.Value);
}

/// <summary>A pulse of which only the greatest length is known. It cannot be folded: modes that need the pulse say what it leaves open.</summary>
public sealed record UnknownEmission : EmissionProfile
{
    /// <summary>No pulse decays more slowly than this, s.</summary>
    public required Measured Longest { get; init => field = Guard.Positive(value); }
    public override string Name => "unknown";
    public override double MeanTime => Delay.Value + 0.5 * Longest.Value;
    public override (double Low, double High) Support => (Delay.Value, Delay.Value + 35 * Longest.Value);
    public override double CumulativeAt(double time) => throw new InvalidOperationException("an unknown pulse has no shape");
    public override double IntegratedCumulativeAt(double time) => throw new InvalidOperationException("an unknown pulse has no shape");

    /// <summary>Pulses that it may be: sudden and exponential ones, at once and late.</summary>
    public IReadOnlyList<EmissionProfile> Candidates => [.. from late in new[] { 0, 0.125, 0.25, 0.5 } from share in new[] { 0, 1.0 / 16, 1.0 / 8, 0.25, 0.5, 1 } where late + share <= 1
        select share == 0 ? (EmissionProfile)new InstantEmission { Delay = Later(late) } : new ExponentialEmission { Delay = Later(late), Tail = new Measured(share * Longest.Value) }];

    Measured Later(double share) => new(Delay.Value + share * Longest.Value);
}

/// <summary>Gaussian pulse.</summary>
public sealed record GaussianEmission : EmissionProfile
{
    /// <summary>Rms width, s.</summary>
    public required Measured Width { get; init => field = Guard.Positive(value); }
    public override string Name => "gaussian";
    public override double MeanTime => Delay.Value;
    public override (double Low, double High) Support => (Delay.Value - 8 * Width.Value, Delay.Value + 8 * Width.Value);
    public override double CumulativeAt(double time) => NormalPulse.Cumulative(time - Delay.Value, Width.Value);
    public override double IntegratedCumulativeAt(double time) => NormalPulse.Integrated(time - Delay.Value, Width.Value);
}

/// <summary>Sudden rise, exponential fall.</summary>
public sealed record ExponentialEmission : EmissionProfile
{
    /// <summary>1/e time, s.</summary>
    public required Measured Tail { get; init => field = Guard.Positive(value); }
    public override string Name => "exponential";
    public override double MeanTime => Delay.Value + Tail.Value;
    public override (double Low, double High) Support => (Delay.Value, Delay.Value + 35 * Tail.Value);

    public override double CumulativeAt(double time)
    {
        double t = time - Delay.Value;
        return t <= 0 ? 0 : -Math.Exp(-t / Tail.Value) + 1;
    }

    public override double IntegratedCumulativeAt(double time) =>
        Math.Max(0, time - Delay.Value) - Tail.Value * CumulativeAt(time);
}

/// <summary>Exponentially modified Gaussian: an exponential fall smeared by a Gaussian.</summary>
/// <remarks>With h the pulse, F its integral and Phi that of the Gaussian, tau h + F = Phi, so each integral follows from the last.</remarks>
public sealed record ExponentialGaussianEmission : EmissionProfile
{
    /// <summary>Rms width of the Gaussian part, s.</summary>
    public required Measured Width { get; init => field = Guard.Positive(value); }
    /// <summary>1/e time of the exponential part, s.</summary>
    public required Measured Tail { get; init => field = Guard.Positive(value); }
    public override string Name => "exponential-gaussian";
    public override double MeanTime => Delay.Value + Tail.Value;
    public override (double Low, double High) Support =>
        (Delay.Value - 8 * Width.Value, Delay.Value + 8 * Width.Value + 35 * Tail.Value);

    /// <summary>The pulse itself, 1/s.</summary>
    public double DensityAt(double time)
    {
        double t = time - Delay.Value, s = Width.Value, tau = Tail.Value;
        double a = (s / tau - t / s) / Math.Sqrt(2);
        // exp(s^2/2tau^2 - t/tau) erfc(a) / 2tau; where erfc is small the product is written with the scaled function
        double gauss = -0.5 * t * t / (s * s);
        return a > 5
            ? Math.Exp(gauss) * ScaledErfc(a) / (2 * tau)
            : Math.Exp(0.5 * s * s / (tau * tau) - t / tau) * SpecialFunctions.Erfc(a) / (2 * tau);
    }

    public override double CumulativeAt(double time) =>
        Math.Clamp(NormalPulse.Cumulative(time - Delay.Value, Width.Value) - Tail.Value * DensityAt(time), 0, 1);

    public override double IntegratedCumulativeAt(double time) =>
        NormalPulse.Integrated(time - Delay.Value, Width.Value) - Tail.Value * CumulativeAt(time);

    /// <summary>exp(a^2) erfc(a) for a &gt;= 5 by its continued fraction; relative error below 1e-13.</summary>
    static double ScaledErfc(double a)
    {
        double tail = a;
        for (int k = 60; k >= 1; k--) tail = a + 0.5 * k / tail;
        return 1 / (Math.Sqrt(Math.PI) * tail);
    }
}

/// <summary>Integrals of a normal pulse.</summary>
static class NormalPulse
{
    public static double Cumulative(double t, double sigma) => 0.5 * SpecialFunctions.Erfc(-t / (sigma * Math.Sqrt(2)));

    public static double Integrated(double t, double sigma) =>
        t * Cumulative(t, sigma) + sigma * Math.Exp(-0.5 * t * t / (sigma * sigma)) / Math.Sqrt(2 * Math.PI);
}
