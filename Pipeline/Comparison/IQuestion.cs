namespace Pipeline.Comparison;

/// <summary>A question asked of data and model, apart from all others.</summary>
public interface IQuestion
{
    /// <summary>Name in results.</summary>
    string Name { get; }

    /// <summary>Whether it needs the number of molecules that the prediction states.</summary>
    bool NeedsAbsolute { get; }

    /// <summary>Whether it has a meaning for what was measured.</summary>
    bool Concerns(ComparisonCase both) => true;

    Answer Ask(ComparisonCase both);
}

/// <summary>Every question. To add one, write its file and add its line.</summary>
public static class Questions
{
    public static IReadOnlyList<IQuestion> All { get; } = [new RateQuestion(), new ArrivalTimeQuestion(), new VelocityQuestion(), new ShapeQuestion()];
}
