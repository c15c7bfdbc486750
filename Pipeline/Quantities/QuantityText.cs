using System.Globalization;
using System.Text.RegularExpressions;

namespace Pipeline.Quantities;

/// <summary>Quantities as physicists write them: "0.4500(9) m", "45.0 ± 0.2 deg", "1.6e-3 ± 5e-5", "20 %".</summary>
public static partial class QuantityText
{
    const string NumberPattern = @"[+-]?(?:\d+\.?\d*|\.\d+)";

    /// <summary>Value and uncertainty in SI units. The unit after "±" holds for both.</summary>
    /// <param name="text">As typed.</param>
    /// <param name="dimension">What is measured.</param>
    /// <exception cref="FormatException">The message says what is accepted.</exception>
    public static Measured Parse(string text, Dimension dimension)
    {
        Match match = Pattern().Match(text.Trim());
        if (!match.Success) throw new FormatException($"a number with unit such as \"{Example(dimension)}\"; decimal point, no thousands separators");
        string unit = match.Groups["unit"].Value;
        if (!UnitTable.TryFind(dimension, unit, out double factor)) throw new FormatException($"a unit out of: {UnitTable.Accepted(dimension)}");
        string exponent = match.Groups["exponent"].Value, digits = match.Groups["value"].Value;
        double value = Number(digits + exponent), sigma = 0;
        if (match.Groups["last"].Success) sigma = InLastDigits(digits, match.Groups["last"].Value, exponent);
        else if (match.Groups["sigma"].Success) sigma = Number(match.Groups["sigma"].Value);
        if (sigma < 0) throw new FormatException("an uncertainty that is not negative");
        (value, sigma) = (UnitTable.ToSi(value, factor), UnitTable.ToSi(sigma, factor));
        if (!double.IsFinite(value) || !double.IsFinite(sigma)) throw new FormatException("a finite number");
        return new Measured(value, sigma);
    }

    /// <summary>"0.4500(9)": the digits in brackets count in units of the last digit of the value.</summary>
    static double InLastDigits(string digits, string last, string exponent)
    {
        if (last.Contains('.', StringComparison.Ordinal)) return Number(last + exponent);
        int point = digits.IndexOf('.', StringComparison.Ordinal), decimals = point < 0 ? 0 : digits.Length - point - 1;
        return Number($"{last}e{-decimals}") * (exponent.Length > 0 ? Number("1" + exponent) : 1);
    }

    static double Number(string text) => double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);

    static string Example(Dimension dimension)
    {
        string first = UnitTable.Accepted(dimension).Split(',')[0];
        return first == "no unit" ? "0.25 ± 0.01" : $"1.50(2) {first}";
    }

    [GeneratedRegex($@"^(?<value>{NumberPattern})(?:\((?<last>\d+\.?\d*)\))?(?<exponent>[eE][+-]?\d+)?(?:\s*(?:±|\+-|\+/-)\s*(?<sigma>{NumberPattern}(?:[eE][+-]?\d+)?))?\s*(?<unit>1/[a-zµμ]+|[^\d\s.,+±-].*)?$", RegexOptions.CultureInvariant, matchTimeoutMilliseconds: 1000)]
    private static partial Regex Pattern();
}
