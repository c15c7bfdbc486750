using Pipeline.Apparatus;

namespace Pipeline.Fitting;

/// <summary>Decelerated against free flight in the same run: what both share, efficiency above all, cancels.</summary>
public static class ConditionRatios
{
    /// <summary>Adds to every decelerated condition its number over that of free flight.</summary>
    public static IReadOnlyList<SpectrumOutcome> Add(IReadOnlyList<SpectrumOutcome> fits, Setup setup)
    {
        SpectrumOutcome? free = fits.FirstOrDefault(f => f.Spectra.Count > 0 && setup.Conditions[f.Signal.Condition] == FlightKind.Free);
        if (free is null) return fits;
        return [.. fits.Select(f => f.Spectra.Count == 0 || setup.Conditions[f.Signal.Condition] == FlightKind.Free ? f
            : f with { Others = [.. f.Others, new($"number over {free.Signal.Condition}", "", Ratio(f.Number, free.Number))], Remarks = [.. f.Remarks, .. Limit(f, setup)] })];
    }

    /// <summary>No stage takes more than twice the Zeeman energy of its field, up and down again.</summary>
    /// <remarks>The energy itself is not measured here: from free and decelerated signals of the shipped day it came out as 39 of 45 GHz, because slow
    /// molecules diverge out of the acceptance; the comparison with a prediction, which has them, tells it.</remarks>
    static IEnumerable<string> Limit(SpectrumOutcome slowed, Setup setup)
    {
        if (setup.Conditions[slowed.Signal.Condition] != FlightKind.Decelerated || setup.Beamline.Decelerator is not { PeakField: { } field } section) yield break;
        double moment = setup.Species.MagneticMoment?.Value ?? Quantities.Codata.BohrMagneton;
        double most = 2 * moment * field.Value;
        if (section.EnergyPerStage.Value <= most) yield break;
        yield return string.Create(System.Globalization.CultureInfo.InvariantCulture,
            $"{slowed.Signal.Condition}: {section.EnergyPerStage.Value / Quantities.Codata.PlanckConstant * 1e-9:F1} GHz a stage are stated, but a field of {field.Value:G3} T can take at most {most / Quantities.Codata.PlanckConstant * 1e-9:F1} GHz, twice the Zeeman energy");
    }

    /// <summary>a / b with independent statistics; a cause moves both by its own share, and the ratio by the difference.</summary>
    public static Quantity Ratio(Quantity a, Quantity b)
    {
        if (a.NotDeterminedBecause is { } because || (because = b.NotDeterminedBecause) is not null) return Quantity.NotDetermined(because);
        if (!(b.Value > 3 * b.Statistical)) return Quantity.NotDetermined("the number in free flight is not clear of zero");
        double ratio = a.Value / b.Value, statistical = Math.Sqrt(Square(a.Statistical / b.Value) + Square(ratio * b.Statistical / b.Value));
        return Quantity.Of(ratio, statistical, Combined(a, b, (x, y) => x / b.Value - ratio * y / b.Value));
    }

    static BudgetLine[] Combined(Quantity a, Quantity b, Func<double, double, double> of) =>
        [.. a.Budget.Select(l => l.Cause).Union(b.Budget.Select(l => l.Cause), StringComparer.Ordinal).Select(cause => new BudgetLine(cause, of(Shift(a, cause), Shift(b, cause))))];

    static double Shift(Quantity q, string cause) => q.Budget.FirstOrDefault(l => l.Cause == cause)?.Shift ?? 0;

    static double Square(double x) => x * x;
}
