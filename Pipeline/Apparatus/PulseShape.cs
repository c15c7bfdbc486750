namespace Pipeline.Apparatus;

/// <summary>A pulse whose density is linear in time within each of its pieces: shares are quadratic there, their integral cubic, both exact.
/// Negative densities, as noise leaves them, are kept.</summary>
public sealed class PulseShape
{
    readonly double[] _times, _share, _integral, _density, _slope;

    /// <param name="times">[n], s, rising.</param>
    /// <param name="share">[n] share of the molecules before each time.</param>
    /// <param name="integral">[n] its integral, s.</param>
    /// <param name="density">[n] density at the beginning of each piece, 1/s; the last is not used.</param>
    /// <param name="slope">[n] its rise within the piece, 1/s^2.</param>
    PulseShape(double[] times, double[] share, double[] integral, double[] density, double[] slope) =>
        (_times, _share, _integral, _density, _slope) = (times, share, integral, density, slope);

    /// <summary>Straight lines between samples, normalised.</summary>
    /// <param name="times">[n], s, rising.</param>
    /// <param name="signal">[n], any unit; its integral must be positive.</param>
    public static PulseShape OfSamples(double[] times, double[] signal)
    {
        int n = times.Length;
        double area = 0;
        for (int i = 1; i < n; i++) area += 0.5 * (signal[i] + signal[i - 1]) * (times[i] - times[i - 1]);
        var (share, integral, density, slope) = (new double[n], new double[n], new double[n], new double[n]);
        for (int i = 0; i + 1 < n; i++)
        {
            double h = times[i + 1] - times[i];
            density[i] = signal[i] / area;
            slope[i] = (signal[i + 1] - signal[i]) / (area * h);
            share[i + 1] = share[i] + h * (density[i] + 0.5 * h * slope[i]);
            integral[i + 1] = integral[i] + h * (share[i] + h * (0.5 * density[i] + h / 6 * slope[i]));
        }
        return new PulseShape(times, share, integral, density, slope);
    }

    /// <summary>Another pulse in pieces: each holds exactly its share of the molecules, at exactly their mean time.</summary>
    /// <param name="pulse">The pulse.</param>
    /// <param name="times">[n], s, rising, over its support.</param>
    public static PulseShape Of(EmissionProfile pulse, double[] times)
    {
        double[] share = [.. times.Select(pulse.CumulativeAt)], integral = [.. times.Select(pulse.IntegratedCumulativeAt)];
        var (density, slope) = (new double[times.Length], new double[times.Length]);
        for (int i = 0; i + 1 < times.Length; i++)
        {
            double h = times[i + 1] - times[i], rise = share[i + 1] - share[i], lag = integral[i + 1] - integral[i] - share[i] * h;
            slope[i] = (6 * rise - 12 * lag / h) / (h * h);
            density[i] = rise / h - 0.5 * h * slope[i];
        }
        return new PulseShape(times, share, integral, density, slope);
    }

    /// <summary>Beginning of the first piece, s.</summary>
    public double Start => _times[0];
    /// <summary>End of the last piece, s.</summary>
    public double End => _times[^1];
    /// <summary>Pieces.</summary>
    public int Count => _times.Length - 1;
    /// <summary>Mean time, s.</summary>
    public double Mean => End - _integral[^1];
    /// <summary>[n] share before each of the times that bound the pieces; outside [0, 1] by noise.</summary>
    public ReadOnlySpan<double> Shares => _share;
    /// <summary>Length of a piece, s.</summary>
    public double Length(int piece) => _times[piece + 1] - _times[piece];

    /// <summary>Mean square distance from the mean, s^2; negative where noise rules.</summary>
    public double Variance()
    {
        double sum = 0;
        for (int i = 0; i < Count; i++)
        {
            double a = _times[i] - Mean, h = Length(i), f = _density[i], g = _slope[i];
            sum += h * (a * a * (f + h * g / 2) + 2 * a * h * (f / 2 + h * g / 3) + h * h * (f / 3 + h * g / 4));
        }
        return sum;
    }

    /// <summary>Share of the molecules before a time.</summary>
    public double ShareBefore(double time)
    {
        if (time <= Start) return 0;
        if (time >= End) return 1;
        (int i, double s) = Place(time);
        return _share[i] + s * (_density[i] + 0.5 * s * _slope[i]);
    }

    /// <summary>Integral of <see cref="ShareBefore"/> up to a time, s.</summary>
    public double IntegralBefore(double time)
    {
        if (time <= Start) return 0;
        if (time >= End) return time - Mean;
        (int i, double s) = Place(time);
        return _integral[i] + s * (_share[i] + s * (0.5 * _density[i] + s / 6 * _slope[i]));
    }

    /// <summary>Piece of a time inside, and the time since its beginning.</summary>
    public (int Piece, double Since) Place(double time)
    {
        int at = Array.BinarySearch(_times, time), piece = Math.Min(at >= 0 ? at : ~at - 1, Count - 1);
        return (piece, time - _times[piece]);
    }

    /// <summary>What a one-pole filter makes of a piece.</summary>
    /// <param name="piece">The piece.</param>
    /// <param name="since">Time since its beginning, s.</param>
    /// <param name="before">Filtered share at its beginning.</param>
    /// <param name="timeConstant">Of the filter, s.</param>
    public double Filtered(int piece, double since, double before, double timeConstant)
    {
        // tau G' + G = share + density s + slope s^2/2; where x is small the closed forms would cancel
        double x = since / timeConstant, third = x < 0.1 ? x * x * x / 6 * (1 - x / 4 * (1 - x / 5 * (1 - x / 6 * (1 - x / 7 * (1 - x / 8 * (1 - x / 9)))))) : 0.5 * x * x - x + 1 - Math.Exp(-x);
        double second = 0.5 * x * x - third, first = x - second;
        return before * (1 - first) + _share[piece] * first + timeConstant * (_density[piece] * second + timeConstant * _slope[piece] * third);
    }

    /// <summary>Stretched about its mean, then shifted so that the mean stands at another time.</summary>
    public PulseShape With(double mean, double stretch) => new([.. _times.Select(t => mean + stretch * (t - Mean))], _share,
        [.. _integral.Select(i => stretch * i)], [.. _density.Select(d => d / stretch)], [.. _slope.Select(d => d / (stretch * stretch))]);
}
