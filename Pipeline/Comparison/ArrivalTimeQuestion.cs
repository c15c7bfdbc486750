using System.Globalization;

namespace Pipeline.Comparison;

/// <summary>By what factor all arrival times would have to be stretched, at free rate.</summary>
sealed class ArrivalTimeQuestion : IQuestion
{
    public string Name => "arrival time";
    public bool NeedsAbsolute => false;

    public bool Concerns(ComparisonCase both) => !both.Scanned;

    public Answer Ask(ComparisonCase both) => StretchFit.Ask(both, Name, (stretch, error) => string.Create(CultureInfo.InvariantCulture,
        $"arrivals {Math.Abs(100 * stretch):F2} ± {100 * error:F2} % {(stretch >= 0 ? "later" : "earlier")} than predicted"));
}
