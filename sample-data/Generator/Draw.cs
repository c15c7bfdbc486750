namespace SampleDay;

/// <summary>Random draws from one seeded stream.</summary>
public sealed class Draw(int seed)
{
    readonly Random _random = new(seed);

    public double Uniform() => _random.NextDouble();

    public double Exponential() => -Math.Log(1 - _random.NextDouble());

    public double Normal() => Math.Sqrt(2 * Exponential()) * Math.Cos(2 * Math.PI * _random.NextDouble());

    /// <summary>By multiplication for small means, as a rounded sum of halves for large ones: exact in both cases.</summary>
    public int Poisson(double mean)
    {
        if (mean <= 0) return 0;
        if (mean > 30) return Poisson(mean / 2) + Poisson(mean / 2);
        double limit = Math.Exp(-mean), product = _random.NextDouble();
        int n = 0;
        while (product > limit)
        {
            n++;
            product *= _random.NextDouble();
        }
        return n;
    }

    /// <summary>From v^3 exp(-((v - u)/alpha)^2), v &gt; 0, by rejection under its maximum.</summary>
    public double FluxSpeed(double u, double alpha)
    {
        double mode = 0.5 * (u + Math.Sqrt(u * u + 6 * alpha * alpha)), top = Density(mode), low = Math.Max(0, u - 5 * alpha), high = u + 7 * alpha;
        while (true)
        {
            double v = low + (high - low) * Uniform();
            if (Uniform() * top < Density(v)) return v;
        }
        double Density(double v) => v * v * v * Math.Exp(-(v - u) * (v - u) / (alpha * alpha));
    }
}
