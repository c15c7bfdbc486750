using Pipeline.Quantities;

namespace Pipeline.Statistics;

/// <summary>What is done about upper limits that rise where the known background falls.</summary>
public enum UpperLimitRule
{
    /// <summary>The construction as it comes: with few counts on a larger background its upper limit jumps up as the background grows.</summary>
    Plain,
    /// <summary>The largest plain upper limit over all backgrounds from the given one upward, so that less background never gives a
    /// weaker limit.</summary>
    NeverRising,
}

/// <summary>Interval of a Poisson signal s &gt;= 0 on an exactly known background, one-sided or two-sided as the data ask for.</summary>
/// <remarks>For each s, counts are accepted in the order of P(k|s + b)/P(k|max(k - b, 0) + b) until they hold the confidence; the interval is
/// from the smallest to the largest s that accepts the observed count. Feldman and Cousins, Phys. Rev. D 57, 3873 (1998). Limits are the
/// edges of the construction itself, not of a grid over s: counts that rank before the observed one are consecutive, and each joins them at
/// a mean that has a closed form. The paper's own table comes from a grid of step 0.005.</remarks>
public static class FeldmanCousins
{
    /// <param name="count">Observed, &gt;= 0.</param>
    /// <param name="background">Expected, exactly known, &gt;= 0.</param>
    /// <param name="confidence">In (0, 1).</param>
    /// <param name="rule">The paper's own is <see cref="UpperLimitRule.NeverRising"/>, said in its section IV B; it needs a confidence
    /// of one half or more.</param>
    /// <returns>Interval of s, in counts; ends to 1e-10 of the mean.</returns>
    /// <exception cref="ArgumentOutOfRangeException">An argument outside its range.</exception>
    public static Interval Of(int count, double background, double confidence, UpperLimitRule rule = UpperLimitRule.NeverRising)
    {
        if (count < 0) throw new ArgumentOutOfRangeException(nameof(count), count, "must be >= 0");
        if (!(background >= 0 && double.IsFinite(background))) throw new ArgumentOutOfRangeException(nameof(background), background, "must be >= 0 and finite");
        double least = rule == UpperLimitRule.NeverRising ? 0.5 : double.Epsilon;
        if (!(confidence >= least && confidence < 1)) throw new ArgumentOutOfRangeException(nameof(confidence), confidence, $"must lie in [{least}, 1)");
        var construction = new Construction(count, background, confidence);
        double upper = construction.Upper();
        if (rule == UpperLimitRule.NeverRising) upper = Math.Max(upper, construction.NextRise());
        return new Interval(construction.Lower(), upper, confidence);
    }

    /// <summary>One count n on one background b; means mu = s + b.</summary>
    sealed class Construction(int n, double b, double confidence)
    {
        /// <summary>Largest accepted s. Above the best mean the counts before n are n + 1 to m, m rising with the mean.</summary>
        public double Upper()
        {
            double best = Math.Max(n, b), upper = best;
            for (int m = (int)best; ; m++)
            {
                double from = Math.Max(best, m > n ? Joins(m) : 0), to = Math.Max(from, Joins(m + 1));
                // Chernoff: the chance of each tail is at most the ratio of n, so that no larger mean can accept it
                if (LogRatio(from) < Math.Log(0.5 * (1 - confidence))) return Math.Max(0, upper - b);
                if (Between(n, m, to) < confidence) upper = to;
                else if (Between(n, m, from) < confidence)
                    upper = Bisection.Root(mu => Between(n, m, mu) - confidence, from, Math.Min(to, MostLikely(n, m)));
            }
        }

        /// <summary>Smallest accepted s. Below the best mean the counts before n are m to n - 1, m falling with the mean.</summary>
        public double Lower()
        {
            if (n <= b) return 0;
            for (int m = 0; m < n; m++)
            {
                double from = Math.Max(b, m > 0 ? Joins(m - 1) : 0), to = Math.Max(from, Joins(m));
                if (Between(m - 1, n - 1, from) < confidence) return from - b;
                if (to > from && Between(m - 1, n - 1, to) < confidence)
                    return Bisection.Root(mu => confidence - Between(m - 1, n - 1, mu), Math.Max(from, MostLikely(m - 1, n - 1)), to) - b;
            }
            return Math.Max(b, Joins(n - 1)) - b;
        }

        /// <summary>Plain upper limit at the next larger background where it jumps up; 0 where there is none beyond.</summary>
        /// <remarks>Between jumps the limit falls as the background grows. It jumps where the mean at which count m + 1 joins passes the
        /// one beyond which n + 1 to m hold less than the confidence. These peaks fall from one to the next (computed for confidences
        /// of 0.5 to 0.9999 and counts to 300), so the first is the highest.</remarks>
        public double NextRise()
        {
            for (int m = (int)Math.Max(n, b) + 1; ; m++)
            {
                double likely = MostLikely(n, m);
                if (Between(n, m, likely) < confidence) continue;
                double high = likely + Math.Sqrt(likely) + 1;
                while (Between(n, m, high) >= confidence) high += Math.Sqrt(likely) + 1;
                double mean = Bisection.Root(mu => confidence - Between(n, m, mu), likely, high);
                // log ratios of n and m + 1 are equal there: b' - n ln b' = ...
                double right = Math.Log(mean) * (m + 1 - n) - Best(m + 1, 0), from = Math.Max(n, b);
                double Excess(double x) => x - (n > 0 ? n * Math.Log(x) : 0) - right;
                if (from < mean && Excess(from) < 0 && Excess(mean) > 0) return mean - Bisection.Root(Excess, from, mean);
            }
        }

        /// <summary>Mean at which count k ranks with n.</summary>
        double Joins(int k) => Math.Exp((Best(k, b) - Best(n, b)) / (k - n));

        /// <summary>ln P(n|mu) less its largest value for any signal.</summary>
        double LogRatio(double mu) => (n > 0 ? n * Math.Log(mu) : 0) - mu - Best(n, b);

        /// <summary>k ln(mean) - mean at the best mean that a signal can give.</summary>
        static double Best(int k, double background)
        {
            double mean = Math.Max(k, background);
            return k == 0 ? -mean : k * Math.Log(mean) - mean;
        }

        /// <summary>Mean at which counts above <paramref name="low"/> and up to <paramref name="high"/> have their largest chance.</summary>
        static double MostLikely(int low, int high) => low < 0 ? 0
            : Math.Exp((MathNet.Numerics.SpecialFunctions.FactorialLn(high) - MathNet.Numerics.SpecialFunctions.FactorialLn(low)) / (high - low));

        /// <summary>P(low &lt; k &lt;= high | mu).</summary>
        static double Between(int low, int high, double mu) => high <= low ? 0 : AtMost(high, mu) - (low < 0 ? 0 : AtMost(low, mu));

        static double AtMost(int k, double mu) => Tail.ChiSquare(2 * mu, 2 * (k + 1.0));
    }
}
