namespace Pipeline.Comparison;

/// <summary>What can be said of a prediction.</summary>
public enum Judgement
{
    /// <summary>A difference that matters is excluded.</summary>
    Agrees,
    /// <summary>The difference cannot be chance at the declared level.</summary>
    Disagrees,
    /// <summary>Neither: the data could not have told.</summary>
    Undecided,
}

/// <summary>One question asked of data and model.</summary>
public sealed record Answer
{
    public required string Condition { get; init; }
    public required string Question { get; init; }
    public required double Measured { get; init; }
    public required double Predicted { get; init; }
    public required double Statistical { get; init; }
    public required double Systematic { get; init; }
    /// <summary>From the finite number of simulated molecules.</summary>
    public required double Simulation { get; init; }
    /// <summary>Chance of a difference at least this large under agreement.</summary>
    public required double PValue { get; init; }
    /// <summary>Whether a difference that matters is excluded, or would have been seen.</summary>
    public required bool WouldHaveShown { get; init; }
    /// <summary>What is known of it in words, with numbers.</summary>
    public required string Finding { get; init; }
    /// <summary>What would decide, where the data do not.</summary>
    public required string WhatWouldDecide { get; init; }

    public double Difference => Measured - Predicted;
    public double Total => Math.Sqrt(Statistical * Statistical + Systematic * Systematic + Simulation * Simulation);
    /// <summary>Difference in its own standard errors.</summary>
    public double Pull => Difference / Total;
}

/// <summary>An answer judged among all that were asked of the run.</summary>
/// <param name="Answer">The answer.</param>
/// <param name="AdjustedPValue">After Holm over all questions of the run.</param>
/// <param name="Judgement">Of this question.</param>
/// <param name="Reason">One sentence.</param>
public sealed record JudgedAnswer(Answer Answer, double AdjustedPValue, Judgement Judgement, string Reason);

/// <summary>The verdict on a run.</summary>
public sealed record Verdict(Judgement Judgement, IReadOnlyList<string> Reasons, IReadOnlyList<JudgedAnswer> Questions);
