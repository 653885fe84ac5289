using System.Collections;
using System.Reflection;

namespace TmLab.Storage.Tests.StageFiles;

/// <summary>Compares records member by member and arrays element by element: the equality of records compares arrays by identity.</summary>
internal static class SameContent
{
    public static void Assert(object? expected, object? actual, string path = "")
    {
        if (expected is null || actual is null)
        {
            Xunit.Assert.True(expected is null && actual is null, $"{path}: {expected ?? "null"} against {actual ?? "null"}");
        }
        else if (expected is string || expected.GetType().IsPrimitive || expected is Enum or DateTimeOffset)
        {
            Xunit.Assert.True(expected.Equals(actual), $"{path}: {expected} against {actual}");
        }
        else if (expected is IEnumerable items)
        {
            object?[] a = [.. items.Cast<object?>()];
            object?[] b = [.. ((IEnumerable)actual).Cast<object?>()];
            Xunit.Assert.True(a.Length == b.Length, $"{path}: {a.Length} against {b.Length} elements");
            for (int k = 0; k < a.Length; k++)
            {
                Assert(a[k], b[k], $"{path}[{k}]");
            }
        }
        else
        {
            Members(expected, actual, path);
        }
    }

    private static void Members(object expected, object actual, string path)
    {
        Xunit.Assert.Same(expected.GetType(), actual.GetType());
        PropertyInfo[] stored = [.. expected.GetType().GetProperties(BindingFlags.Public | BindingFlags.Instance)
            .Where(p => p.GetIndexParameters().Length == 0 && IsStored(expected.GetType(), p))];
        Xunit.Assert.NotEmpty(stored);
        foreach (PropertyInfo property in stored)
        {
            Assert(property.GetValue(expected), property.GetValue(actual), $"{path}.{property.Name}");
        }
    }

    private static bool IsStored(Type type, PropertyInfo property) =>
        type.GetField($"<{property.Name}>k__BackingField", BindingFlags.NonPublic | BindingFlags.Instance) is not null
        || type == typeof(System.Numerics.Complex);
}
