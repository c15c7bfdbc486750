namespace Pipeline.Predictions;

/// <summary>A prediction as the detector would record it.</summary>
public sealed record FoldedPrediction
{
    /// <summary>[bins] expected counts a shot, dead time apart.</summary>
    public required double[] Signal { get; init; }
    /// <summary>[bins] variance of <see cref="Signal"/> from the finite number of simulated molecules.</summary>
    public required double[] Variance { get; init; }
    /// <summary>(sum of weights)^2 / sum of squared weights over the molecules inside the acceptance (Kish 1965).</summary>
    public required double EffectiveSize { get; init; }
    /// <summary>Molecules a shot that cross the probe inside the acceptance.</summary>
    public required double Molecules { get; init; }
    /// <summary>Their mean speed, m/s.</summary>
    public required double MeanSpeed { get; init; }
    /// <summary>Molecules a shot below the capture velocity.</summary>
    public required double BelowCapture { get; init; }
    /// <summary>[cells] molecules a shot by speed, for a picture beside the spectrum.</summary>
    public required double[] Spectrum { get; init; }
    /// <summary>Rows that miss the acceptance.</summary>
    public required int Outside { get; init; }
}
