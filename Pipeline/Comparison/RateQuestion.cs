using System.Globalization;
using Pipeline.Statistics;

namespace Pipeline.Comparison;

/// <summary>Counts of molecules over predicted counts, in the whole window.</summary>
sealed class RateQuestion : IQuestion
{
    public string Name => "rate";
    public bool NeedsAbsolute => true;

    public Answer Ask(ComparisonCase both)
    {
        double predicted = both.Predicted.Sum(), rate = (both.Total.Sum() - both.Background.Sum()) / predicted;
        double counting = both.DataVariance(Math.Max(rate, 0)).Sum() + both.Causes.Sum(c => Square(c.Sum()));
        double statistical = Math.Sqrt(counting / Square(predicted) + Square(rate * both.YieldScatter));
        double simulation = Math.Abs(rate) * Math.Sqrt(both.SimulationCovariance.RowSums().Sum()) / predicted;
        double systematic = Math.Abs(rate) * Math.Sqrt(both.Nuisances.Sum(n => Square(n.Vector.Sum() / predicted)));
        double error = Math.Sqrt(Square(statistical) + Square(simulation) + Square(systematic)), matters = both.Settings.RateMatters;
        // few blocks of shots know their own scatter badly: Student's t with effective degrees of freedom
        double freedom = WelchSatterthwaite.EffectiveFreedom([(Square(rate * both.YieldScatter), both.YieldFreedom),
            (Square(error) - Square(rate * both.YieldScatter), double.PositiveInfinity)]);
        return new Answer
        {
            Condition = both.Condition, Question = Name, Measured = rate, Predicted = 1, Statistical = statistical,
            Systematic = systematic, Simulation = simulation, PValue = Tail.StudentTwoSided((rate - 1) / error, freedom),
            WouldHaveShown = Equivalence.Holds(rate - 1, error, matters, Tail.StudentQuantile(0.95, freedom)),
            Finding = string.Create(CultureInfo.InvariantCulture, $"{rate:F3} ± {error:F3} of the predicted counts"),
            WhatWouldDecide = Equivalence.WhatWouldDecide(rate - 1, statistical, double.Hypot(systematic, simulation), matters),
        };
    }

    static double Square(double x) => x * x;
}
