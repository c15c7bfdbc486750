using System.Globalization;

namespace Pipeline.Comparison;

/// <summary>Two one-sided tests at 5 %: a difference that matters is excluded on both sides.</summary>
/// <remarks>Schuirmann, J. Pharmacokinet. Biopharm. 15, 657 (1987).</remarks>
static class Equivalence
{
    /// <summary>95 % quantile of the normal distribution.</summary>
    const double OneSided = 1.6448536269514722;

    /// <param name="difference">Measured less predicted.</param>
    /// <param name="error">Its standard error.</param>
    /// <param name="matters">The difference that matters.</param>
    /// <param name="quantile">95 % quantile of the difference in standard errors; the normal one where errors are well known.</param>
    public static bool Holds(double difference, double error, double matters, double quantile = OneSided) =>
        Math.Abs(difference) + quantile * error < matters;

    /// <summary>How many times the shots would decide, or what stands in the way.</summary>
    /// <param name="difference">Measured less predicted.</param>
    /// <param name="statistical">Falls with the shots.</param>
    /// <param name="other">Does not.</param>
    /// <param name="matters">The difference that matters.</param>
    public static string WhatWouldDecide(double difference, double statistical, double other, double matters)
    {
        double room = (matters - Math.Abs(difference)) / OneSided;
        if (room <= 0) return "the difference is as large as what matters, yet may be chance: only more shots can tell";
        if (room <= other && statistical > other)
            return string.Create(CultureInfo.InvariantCulture, $"more shots first: chance alone still moves it by {statistical:G2}");
        if (room <= other) return "more shots would not decide: the uncertainty of apparatus and simulation is too large for a difference of this size";
        double factor = statistical * statistical / (room * room - other * other);
        return string.Create(CultureInfo.InvariantCulture, $"about {Math.Max(factor, 1.1):G2} times the shots would decide");
    }
}
