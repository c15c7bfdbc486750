using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>When molecules leave the source, as a normalised pulse after the trigger.</summary>
public abstract record EmissionProfile
{
    /// <summary>Shift of the whole pulse after the trigger, s.</summary>
    public Measured Delay { get; init; }

    /// <summary>Name in the configuration.</summary>
    public abstract string Name { get; }

    /// <summary>Mean emission time after the trigger, s.</summary>
    public abstract double MeanTime { get; }

    /// <summary>Share of the molecules that left before <paramref name="time"/> (s after the trigger), in [0, 1]; that of a measured pulse may
    /// leave the range by its noise, at most by 0.02.</summary>
    public abstract double CumulativeAt(double time);

    /// <summary>Integral of <see cref="CumulativeAt"/> from minus infinity to <paramref name="time"/>, s.</summary>
    public abstract double IntegratedCumulativeAt(double time);

    /// <summary>Times (s after the trigger) before and after which less than 1e-15 of the molecules leave.</summary>
    public abstract (double Low, double High) Support { get; }

    /// <summary>What a reader of the results should know of the pulse; null: nothing.</summary>
    public virtual string? Remark => null;
}
