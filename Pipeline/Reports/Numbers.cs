using System.Globalization;
using Pipeline.Fitting;

namespace Pipeline.Reports;

/// <summary>Numbers as they stand in pages: as many digits as their error allows.</summary>
static class Numbers
{
    /// <summary>"2964 ± 130 (statistical) ± 95 (systematic)": all rounded to the second digit of the smaller error that matters.</summary>
    public static string WithErrors(Quantity q)
    {
        if (q.NotDeterminedBecause is not null) return "not determined";
        int decimals = Decimals(Math.Max(q.Total, Math.Abs(q.Value) * 1e-6));
        return $"{Round(q.Value, decimals)} ± {Round(q.Statistical, decimals)} (statistical) ± {Round(q.Systematic, decimals)} (systematic)";
    }

    /// <summary>"2964 ± 160".</summary>
    public static string WithTotal(Quantity q)
    {
        if (q.NotDeterminedBecause is not null) return "not determined";
        int decimals = Decimals(Math.Max(q.Total, Math.Abs(q.Value) * 1e-6));
        return $"{Round(q.Value, decimals)} ± {Round(q.Total, decimals)}";
    }

    /// <summary>So many significant digits, without exponent where that is readable.</summary>
    public static string Digits(double value, int digits = 3) =>
        !double.IsFinite(value) ? "–" : value == 0 ? "0" : Math.Abs(value) is >= 1e-3 and < 1e6
            ? Round(value, Math.Clamp(digits - 1 - (int)Math.Floor(Math.Log10(Math.Abs(value))), -9, 12))
            : value.ToString($"G{digits}", CultureInfo.InvariantCulture);

    /// <summary>So many decimals.</summary>
    public static string Decimal(double value, int decimals) => double.IsFinite(value) ? Round(value, decimals) : "–";

    /// <summary>Decimals at which an error shows two digits; negative where it is above 100.</summary>
    public static int Decimals(double error) => error > 0 ? Math.Clamp(1 - (int)Math.Floor(Math.Log10(error)), -9, 9) : 3;

    static string Round(double value, int decimals)
    {
        double scale = Math.Pow(10, -Math.Min(decimals, 0));
        double rounded = Math.Round(value / scale) * scale;
        // minus zero is zero
        return decimals > 0 ? Plain(Math.Round(value, decimals)).ToString($"F{decimals}", CultureInfo.InvariantCulture) : Plain(rounded).ToString("F0", CultureInfo.InvariantCulture);
    }

    static double Plain(double value) => value == 0 ? 0 : value;
}
