using System.Text.Json.Serialization;

namespace Pipeline.Fitting;

/// <summary>What one common cause moves a result by, for one of its standard deviations.</summary>
public sealed record BudgetLine(string Cause, double Shift);

/// <summary>A result with its statistical and systematic parts, or the reason why there is none.</summary>
public sealed record Quantity
{
    [JsonConstructor]
    Quantity() { }

    /// <summary>NaN where not determined.</summary>
    [JsonInclude]
    public double Value { get; private init; }
    /// <summary>One standard error from the scatter between blocks of shots.</summary>
    [JsonInclude]
    public double Statistical { get; private init; }
    /// <summary>One standard error from all common causes, in quadrature.</summary>
    [JsonInclude]
    public double Systematic { get; private init; }
    [JsonInclude]
    public IReadOnlyList<BudgetLine> Budget { get; private init; } = [];
    /// <summary>Null where the value stands.</summary>
    [JsonInclude]
    public string? NotDeterminedBecause { get; private init; }

    /// <summary>Statistical and systematic in quadrature.</summary>
    public double Total => double.Hypot(Statistical, Systematic);

    /// <summary>The quantity, or that it is not determined where value or error is no number: a width whose square noise makes negative, in
    /// the data or in some of their replicas.</summary>
    public static Quantity Of(double value, double statistical, IReadOnlyList<BudgetLine> budget)
    {
        double systematic = Math.Sqrt(budget.Sum(b => b.Shift * b.Shift));
        return double.IsFinite(value) && double.IsFinite(statistical) && double.IsFinite(systematic)
            ? new Quantity { Value = value, Statistical = statistical, Budget = budget, Systematic = systematic }
            : NotDetermined("noise far from the beam outweighs it, in the data or in data that could as well have been recorded");
    }

    /// <summary>In another unit.</summary>
    public Quantity Times(double factor) => this with
    {
        Value = Value * factor, Statistical = Statistical * factor, Systematic = Systematic * factor, Budget = [.. Budget.Select(b => b with { Shift = b.Shift * factor })],
    };

    public static Quantity NotDetermined(string because) =>
        new() { Value = double.NaN, Statistical = double.NaN, Systematic = double.NaN, NotDeterminedBecause = because };
}
