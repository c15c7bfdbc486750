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
