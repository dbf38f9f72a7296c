package reluct
