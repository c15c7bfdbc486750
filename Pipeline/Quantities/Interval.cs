using System.Text.Json.Serialization;

namespace Pipeline.Quantities;

/// <summary>A closed interval that covers the true value with the stated confidence.</summary>
public readonly record struct Interval
{
    /// <param name="low">Lower end, not above <paramref name="high"/>.</param>
    /// <param name="high">Upper end.</param>
    /// <param name="confidence">Coverage, in (0, 1).</param>
    /// <exception cref="ArgumentOutOfRangeException">Ends out of order, or a confidence outside (0, 1).</exception>
    [JsonConstructor]
    public Interval(double low, double high, double confidence)
    {
        if (!(low <= high)) throw new ArgumentOutOfRangeException(nameof(low), low, $"must not exceed the upper end {high}");
        if (confidence is not (> 0 and < 1)) throw new ArgumentOutOfRangeException(nameof(confidence), confidence, "must lie in (0, 1)");
        Low = low;
        High = high;
        Confidence = confidence;
    }

    public double Low { get; }
    public double High { get; }
    public double Confidence { get; }

    /// <summary>Whether <paramref name="value"/> lies inside, ends included.</summary>
    public bool Contains(double value) => value >= Low && value <= High;
}
