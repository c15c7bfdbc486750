namespace Pipeline.Reduction;

/// <summary>One analog record, less the mean of its own time before the trigger.</summary>
/// <remarks>The offset of a digitiser walks from shot to shot; scattered light and dark current that are steady go with it, in every kind of
/// shot alike. The error of the baseline moves all bins of the shot together: it shows in the scatter between blocks of shots, and is a
/// common cause of the summed signal.</remarks>
sealed class AnalogRecord
{
    /// <summary>Noise that a trigger mark must exceed.</summary>
    const double Clear = 5;
    readonly RecordShape _shape;
    readonly int _trigger;
    readonly double _noise;

    AnalogRecord(double[] volts, RecordShape shape, int trigger, double noise, double baselineVariance) =>
        (Volts, _shape, _trigger, _noise, BaselineVariance) = (volts, shape, trigger, noise, baselineVariance);

    /// <summary>Variance of the baseline that was subtracted, V^2.</summary>
    public double BaselineVariance { get; }

    /// <summary>[samples] V, baseline subtracted.</summary>
    public double[] Volts { get; }

    /// <param name="volts">[samples] as recorded; changed in place.</param>
    /// <param name="shape">The record; 20 samples before the trigger or more.</param>
    public static AnalogRecord Of(double[] volts, RecordShape shape)
    {
        // a last tenth of the time before the trigger is left out: jitter and switching reach into it
        int trigger = (int)Math.Round(-shape.OriginSeconds / shape.TickSeconds), quiet = (int)(0.9 * trigger);
        if (quiet < 20)
            throw new DataFaultException("analog record", $"{Math.Max(trigger, 0)} samples before the trigger", "20 or more, for the baseline of each shot", "record some time before the trigger");
        double baseline = 0, squares = 0;
        for (int i = 0; i < quiet; i++) baseline += volts[i] / quiet;
        for (int i = 0; i < quiet; i++) squares += (volts[i] - baseline) * (volts[i] - baseline) / quiet;
        for (int i = 0; i < volts.Length; i++) volts[i] -= baseline;
        return new AnalogRecord(volts, shape, trigger, Math.Sqrt(squares), VarianceOfMean(volts.AsSpan(0, quiet)));
    }

    /// <summary>From the scatter of segments, which are longer than the noise remembers.</summary>
    static double VarianceOfMean(ReadOnlySpan<double> quiet)
    {
        const int Segments = 8;
        double sum = 0, squares = 0;
        int length = quiet.Length / Segments;
        if (length == 0) return 0;
        for (int s = 0; s < Segments; s++)
        {
            double mean = System.Numerics.Tensors.TensorPrimitives.Sum(quiet.Slice(s * length, length)) / length;
            (sum, squares) = (sum + mean, squares + mean * mean);
        }
        return Math.Max(0, squares / Segments - sum / Segments * (sum / Segments)) / (Segments - 1);
    }

    /// <summary>Whether anything clear of the noise happens soon after the trigger.</summary>
    public bool HasMark(double withinSeconds)
    {
        int end = Math.Min(Volts.Length, _trigger + (int)Math.Ceiling(withinSeconds / _shape.TickSeconds));
        for (int i = _trigger; i < end; i++) if (Math.Abs(Volts[i]) > Clear * _noise) return true;
        return false;
    }
}
