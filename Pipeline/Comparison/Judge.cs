using System.Globalization;
using Pipeline.Statistics;

namespace Pipeline.Comparison;

/// <summary>Answers to a verdict.</summary>
public static class Judge
{
    /// <param name="answers">All answers of the run; may be empty.</param>
    /// <param name="level">Chance of a false "disagrees" over all of them.</param>
    /// <param name="noneBecause">Why nothing was asked, where nothing was.</param>
    public static Verdict Decide(IReadOnlyList<Answer> answers, double level, string noneBecause)
    {
        if (answers.Count == 0) return new Verdict(Judgement.Undecided, [noneBecause], []);
        double[] adjusted = MultipleComparisons.Holm([.. answers.Select(a => a.PValue)]);
        JudgedAnswer[] judged = [.. answers.Select((a, i) => Decide(a, adjusted[i], level, answers.Count))];
        Judgement overall = judged.Any(j => j.Judgement == Judgement.Disagrees) ? Judgement.Disagrees
            : judged.All(j => j.Judgement == Judgement.Agrees) ? Judgement.Agrees : Judgement.Undecided;
        string[] reasons = [.. judged.Where(j => j.Judgement == overall).Select(j => j.Reason)];
        return new Verdict(overall, reasons, judged);
    }

    static JudgedAnswer Decide(Answer answer, double adjusted, double level, int count)
    {
        string head = $"{answer.Condition}, {answer.Question}: {answer.Finding}";
        if (adjusted < level)
            return new JudgedAnswer(answer, adjusted, Judgement.Disagrees, string.Create(CultureInfo.InvariantCulture,
                $"{head}; p = {adjusted:G2} after correction for {count} questions"));
        return answer.WouldHaveShown
            ? new JudgedAnswer(answer, adjusted, Judgement.Agrees, $"{head}; a difference that matters would have shown")
            : new JudgedAnswer(answer, adjusted, Judgement.Undecided, $"{head}; {answer.WhatWouldDecide}");
    }
}
